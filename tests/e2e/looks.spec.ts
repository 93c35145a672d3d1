import AxeBuilder from '@axe-core/playwright';
import { expect, type Page, test } from '@playwright/test';
import { idIn, pageOf, person } from './support/people';

const WCAG = ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'];
/**
 * react-big-calendar writes its grid of roles itself and gives no way to set them: a column's head
 * stands in a button instead of a row, and rows of the month hold buttons. A block is as high as its
 * session is long (WCAG 2.5.8 excepts what is essential), so a quarter of an hour is under 24 px. The
 * list view holds the same sessions in our own markup, and is checked by every rule.
 */
const CALENDAR = {
  wait: '.rbc-calendar',
  rules: ['aria-required-parent', 'aria-required-children', 'target-size'],
};
type Except = typeof CALENDAR;

const pages: { path: string; except?: Except }[] = [
  { path: '/today' },
  { path: '/studies' },
  { path: '/studies/new' },
  { path: '/calendar?view=list' },
  { path: '/calendar?view=day', except: CALENDAR },
  { path: '/calendar?view=week', except: CALENDAR },
  { path: '/calendar?view=month', except: CALENDAR },
  { path: '/models' },
  { path: '/lab' },
  { path: '/lab/people' },
  { path: '/lab/rigs' },
  { path: '/lab/hours' },
  { path: '/lab/audit' },
  { path: '/account' },
  { path: '/studies/nothing-here' },
];
/** Studies of the demo lab: all steps of the one that is half-way, what is special of the published one. */
const studies = [
  {
    title: 'Repressor ring under inhibitor',
    steps: ['', 'system', 'prediction', 'series', 'sessions', 'readings', 'onset'],
  },
  { title: 'Plankton at rising dilution', steps: ['readings', 'onset'] },
];

/** What the browser complains about while a page is open. */
function complaints(page: Page): string[] {
  const found: string[] = [];
  page.on('console', (message) => {
    // A page that is not there is answered with 404, which the browser logs as an error.
    const missing = /status of 404/.test(message.text());
    if (message.type() === 'error' && !missing) found.push(message.text());
  });
  page.on('pageerror', (error) => found.push(error.message));
  return found;
}

/** The document never scrolls sideways; what is wide scrolls inside its own plate. */
async function overflow(page: Page): Promise<number> {
  return page.evaluate(() => {
    const root = document.documentElement;
    return root.scrollWidth - root.clientWidth;
  });
}

/** Every rule in light, in dark what colours can break; at a tablet's width the markup is the same. */
const rounds = [
  { size: 'desk', scheme: 'light', width: 1440, height: 900, rules: 'all' },
  { size: 'desk', scheme: 'dark', width: 1440, height: 900, rules: 'colour' },
  { size: 'tablet', scheme: 'dark', width: 820, height: 1180, rules: 'none' },
  { size: 'tablet', scheme: 'light', width: 820, height: 1180, rules: 'none' },
] as const;

async function violations(page: Page, rules: 'all' | 'colour', except?: Except) {
  const axe = new AxeBuilder({ page });
  if (rules === 'all') axe.withTags(WCAG).disableRules(except?.rules ?? []);
  else axe.withRules(['color-contrast', 'link-in-text-block']);
  const { violations: found } = await axe.analyze();
  return found.map((v) => `${v.id}: ${v.nodes.map((n) => n.target.join(' ')).join(', ')}`);
}

async function expectGood(page: Page, path: string, except?: Except): Promise<void> {
  const found = complaints(page);
  await page.setViewportSize({ width: 1440, height: 900 });
  await page.goto(path, { waitUntil: 'networkidle' });
  // A page that is not there is drawn by the browser; until then its document says no language.
  await page.locator('html[lang]').waitFor();
  if (except) await page.locator(except.wait).waitFor();
  for (const { size, scheme, width, height, rules } of rounds) {
    await page.setViewportSize({ width, height });
    await page.emulateMedia({ colorScheme: scheme, reducedMotion: 'reduce' });
    const where = `${path}, ${size}, ${scheme}`;
    expect.soft(await overflow(page), `sideways scroll of ${where}`).toBeLessThanOrEqual(0);
    if (rules === 'none') continue;
    expect.soft(await violations(page, rules, except), `axe on ${where}`).toEqual([]);
  }
  expect.soft(found, `console of ${path}`).toEqual([]);
  page.removeAllListeners();
}

test('the sign-in page looks right', async ({ page }) => {
  await expectGood(page, '/sign-in');
});

for (const { path, except } of pages) {
  test(`${path} looks right`, async ({ browser }) => {
    const page = await pageOf(browser, person('head'));
    await expectGood(page, path, except);
    await page.context().close();
  });
}

for (const { title, steps } of studies) {
  test(`the pages of “${title}” look right`, async ({ browser }) => {
    const page = await pageOf(browser, person('head'));
    await page.goto('/studies');
    const link = page.getByRole('link', { name: title }).first();
    const study = idIn((await link.getAttribute('href')) ?? '');
    for (const step of steps) await expectGood(page, `/studies/${study}/${step}`);
    await page.context().close();
  });
}

test('a session at the bench looks right', async ({ browser }) => {
  const page = await pageOf(browser, person('technician'));
  await page.goto('/calendar?view=list');
  const sessions = page.getByRole('main').locator('a[href^="/sessions/"]');
  const later = page.getByRole('navigation', { name: 'Time' }).getByRole('link', { name: 'Later' });
  if ((await sessions.count()) === 0) await later.click();
  const href = await sessions.first().getAttribute('href');
  await expectGood(page, href ?? '');
  await page.context().close();
});
