import { expect, type Locator, type Page, test } from '@playwright/test';
import { itemOf, putLater } from './support/calendar';
import { laidOut, movable } from './support/laid-out';
import { pageOf, password, person } from './support/people';

/** More stops of the Tab key than any page has. */
const MOST_STOPS = 300;

/** Presses Tab until the element has the focus, as somebody without a mouse would. */
async function tabTo(page: Page, target: Locator): Promise<void> {
  await target.waitFor();
  for (let stop = 0; stop < MOST_STOPS; stop += 1) {
    if (await target.evaluate((e) => e === document.activeElement)) return;
    await page.keyboard.press('Tab');
  }
  throw new Error(`Tab does not lead to ${target}`);
}

async function press(page: Page, target: Locator): Promise<void> {
  await tabTo(page, target);
  await page.keyboard.press('Enter');
}

/** What has the focus is outlined in at least two pixels. */
async function expectVisibleFocus(page: Page): Promise<void> {
  const outline = await page.evaluate(() => {
    const style = getComputedStyle(document.activeElement ?? document.body);
    return { style: style.outlineStyle, width: Number.parseFloat(style.outlineWidth) };
  });
  expect(outline.style).not.toBe('none');
  expect(outline.width).toBeGreaterThanOrEqual(2);
}

test('signing in takes the keyboard alone', async ({ page }) => {
  await page.goto('/sign-in');
  await tabTo(page, page.getByLabel('Address'));
  await page.keyboard.type(person('technician').email);
  await page.keyboard.press('Tab');
  await page.keyboard.type(password);
  await page.keyboard.press('Enter');
  await expect(page.getByRole('heading', { name: 'Today', level: 1 })).toBeVisible();
  await page.keyboard.press('Tab');
  await expect(page.getByRole('link', { name: 'Skip to the page' })).toBeFocused();
  await expectVisibleFocus(page);
});

test('a session is moved from the list by the keyboard alone', async ({ browser }) => {
  const { sessions } = await laidOut(browser);
  const session = movable(sessions);
  const page = await pageOf(browser, person('investigator'));
  await page.goto('/today');
  const places = page.getByRole('navigation', { name: 'Places' });
  await press(page, places.getByRole('link', { name: 'Calendar' }));
  const view = page.getByRole('navigation', { name: 'View' }).getByRole('link', { name: 'List' });
  await press(page, view);
  await expect(view).toHaveAttribute('aria-current', 'page');
  const item = itemOf(page, session.id);
  const later = page.getByRole('navigation', { name: 'Time' }).getByRole('link', { name: 'Later' });
  const empty = page.getByRole('main').getByText('No sessions in this week.');
  await expect(item.or(empty).first()).toBeVisible();
  if ((await item.count()) === 0) await press(page, later);
  const move = item.getByRole('button', { name: /^Move run/ });
  await press(page, move);
  await expect(move).toHaveAttribute('aria-expanded', 'true');
  await tabTo(page, page.getByLabel(/^Begins/));
  await expectVisibleFocus(page);
  const then = await putLater(page, 5);
  await press(page, page.getByRole('button', { name: 'Move the session' }));
  await expect(page.getByText('Moved.', { exact: true })).toBeVisible();
  await expect(item).toContainText(then);
});

test('stop, and taking it back, by the keyboard alone', async ({ browser }) => {
  const { sessions } = await laidOut(browser);
  const first = sessions[0];
  if (!first) throw new Error('nothing was laid out');
  const page = await pageOf(browser, person('technician'));
  await page.goto(`/sessions/${first.id}`);
  await press(page, page.getByRole('button', { name: 'Stop', exact: true }));
  await expect(page.getByRole('heading', { name: 'Stopped. Set nothing.' })).toBeVisible();
  await expect(page.getByRole('button', { name: 'It is the right one' })).toHaveCount(0);
  await press(page, page.getByRole('button', { name: /^It was a slip/ }));
  await expect(page.getByRole('button', { name: 'It is the right one' })).toBeVisible();
});
