import { type Browser, expect, type Page, test } from '@playwright/test';
import { collect, figureOf, type SessionRow, sessionsOf, setDose } from './support/bench';
import { inList, nextWeek, openCalendar } from './support/calendar';
import { giveAllHours, takeAllHours } from './support/lab';
import { calendarOf, mailTo } from './support/mail';
import { pageOf, person } from './support/people';
import { recordOf, type State, trueOnset } from './support/reactor';
import { upload } from './support/readings';
import { approve, askApproval, createStudy, design, JOB_MS, predict } from './support/study';

const title = `Feed onset in the flow reactor ${Date.now().toString(36)}`;
const RECORD_MINUTES = 90;
/** From one setting of the climb to the next. */
const LEVEL_MS = 100 * 60_000;

type Done = { run: number; dose: number };

test('a study goes all the way round, by its roles', async ({ browser }) => {
  // Four calculations, some thirty pages: a busy machine may take its time.
  test.setTimeout(600_000);
  const head = await pageOf(browser, person('head'));
  const investigator = await pageOf(browser, person('investigator'));
  await test.step('the head gives the technician hours', () =>
    giveAllHours(head, person('technician').name));
  const studyId = await plan(investigator, head);
  const laid = await layOut(investigator, studyId);
  await test.step('the sessions are on the calendar', () => onCalendar(investigator, laid));
  const last = Math.max(...laid.map((s) => s.run));
  const open = laid.filter((s) => s.run === last);
  const done = await benchWork(
    browser,
    laid.filter((s) => s.run < last),
  );
  await test.step('verdicts', () => verdicts(investigator, studyId, done));
  await test.step('observed beside predicted', () => onset(investigator, studyId));
  await replan(investigator, head, studyId, open);
  await test.step('the hours are taken back', () => takeAllHours(head, person('technician').name));
});

/** From the library to an approved series. */
async function plan(investigator: Page, head: Page): Promise<string> {
  const studyId = await test.step('a study from the library', () =>
    createStudy(investigator, { title, ceiling: '4', largestStep: '1.5' }));
  await test.step('prediction', async () => {
    await predict(investigator, studyId, 40);
    // Strogatz 1994, section 7.3, with the library's own turnover: 0.208 mmol/L/min.
    const ribbon = investigator.getByRole('img', { name: /Onsets predicted at 0\.208/ });
    await expect(ribbon.first()).toBeVisible();
  });
  await test.step('series', () =>
    design(investigator, studyId, {
      levels: 3,
      doubt: '1.2',
      settleHours: '0.5',
      recordHours: '1',
    }));
  await test.step('approval', async () => {
    await askApproval(investigator);
    await mailTo(person('head').email, new RegExp(`^For your approval: ${title}$`));
    await approve(head, title);
  });
  return studyId;
}

async function layOut(page: Page, studyId: string): Promise<SessionRow[]> {
  return test.step('sessions', async () => {
    await page.goto(`/studies/${studyId}/sessions`);
    await page.getByRole('button', { name: 'Lay out the sessions' }).click();
    const table = page.getByRole('table', { name: /^Sessions of this study/ });
    await expect(table).toBeVisible({ timeout: JOB_MS });
    const rows = await sessionsOf(page, studyId);
    expect(rows.length).toBeGreaterThanOrEqual(6);
    expect(new Set(rows.map((r) => r.state))).toEqual(new Set(['planned']));
    return rows;
  });
}

async function onCalendar(page: Page, laid: SessionRow[]): Promise<void> {
  const [first] = laid;
  if (!first) throw new Error('nothing was laid out');
  const item = await inList(page, first.id);
  await expect(item).toContainText(first.person);
  await expect(item).toContainText('Flow reactor 1');
  await openCalendar(page, 'Week');
  const blocks = page.locator('.rbc-event').filter({ hasText: title });
  const block = blocks.filter({ hasText: `run ${first.run},` }).first();
  await page.locator('.rbc-calendar').waitFor();
  if ((await block.count()) === 0) await nextWeek(page);
  await expect(block).toBeAttached();
}

/** Each person reads the mail, then does the climb level after level and uploads what was recorded. */
async function benchWork(browser: Browser, sessions: SessionRow[]): Promise<Done[]> {
  const names = [...new Set(sessions.map((s) => s.person))];
  const pages = new Map<string, Page>();
  for (const name of names) {
    const who = [person('technician'), person('late'), person('investigator')].find(
      (p) => p.name === name,
    );
    if (!who) throw new Error(`nobody of the demo lab is called ${name}`);
    await test.step(`${name} gets the mail`, () =>
      invited(
        who.email,
        sessions.filter((s) => s.person === name),
      ));
    pages.set(name, await pageOf(browser, who));
  }
  const runs = [...new Set(sessions.map((s) => s.run))].sort((a, b) => a - b);
  // The devices' clocks are hours behind: the series began that long ago.
  let at = Date.now() - runs.length * LEVEL_MS;
  let from: State = { P: 0.1, F: 0.2 };
  const done: Done[] = [];
  for (const run of runs) {
    const own = sessions.filter((s) => s.run === run);
    await test.step(`run ${run} at the bench`, async () => {
      const { dose, end } = await oneRun(pages, own, { at, from });
      done.push({ run, dose });
      from = end;
    });
    at += LEVEL_MS;
  }
  return done;
}

async function oneRun(
  pages: Map<string, Page>,
  own: SessionRow[],
  start: { at: number; from: State },
): Promise<{ dose: number; end: State }> {
  const at = (minutes: number) => new Date(start.at + minutes * 60_000);
  const setting = own.find((s) => s.what.startsWith('Set the dose'));
  const collecting = own.find((s) => s.what.startsWith('Collect'));
  if (!setting || !collecting) throw new Error('a run has a setting and a collecting');
  const setter = pages.get(setting.person) as Page;
  await setter.clock.setFixedTime(at(0));
  const dose = await setDose(setter, setting.id, figureOf(setting.dose));
  const collector = pages.get(collecting.person) as Page;
  await collector.clock.setFixedTime(at(RECORD_MINUTES));
  await collect(collector, collecting.id);
  await collector.getByRole('link', { name: 'Upload the readings' }).click();
  const seed = setting.run;
  const { csv, end } = recordOf({ dose, from: start.from, minutes: RECORD_MINUTES, seed });
  const said = await upload(collector, { name: `run-${seed}.csv`, content: csv });
  expect(said).toBe('361 readings kept.');
  return { dose, end };
}

async function invited(email: string, sessions: SessionRow[]): Promise<void> {
  const mail = await mailTo(email, new RegExp(`for you: ${title}$`));
  const calendar = await calendarOf(mail);
  for (const s of sessions) {
    expect(calendar).toContain(`UID:${s.id}@swaypoint`);
    expect(mail.text).toContain(`/sessions/${s.id}`);
  }
}

/** Below the onset of the invented extract no record may be sustained, above it none steady. */
async function verdicts(page: Page, studyId: string, done: Done[]): Promise<void> {
  await page.goto(`/studies/${studyId}/readings`);
  const judged = page.getByRole('heading', { name: new RegExp(`^${done.length} of .* judged`) });
  await expect(judged).toBeVisible({ timeout: JOB_MS });
  const table = page.getByRole('table', { name: 'Runs and what their records show' });
  const sides = { below: 0, above: 0 };
  for (const { run, dose } of done) {
    const row = table
      .getByRole('row')
      .filter({ has: page.getByRole('link', { name: `Run ${run}` }) });
    const text = (await row.textContent()) ?? '';
    const above = dose * 0.1 > trueOnset;
    expect(text, `run ${run} at ${dose} mL/h`).toMatch(
      above ? /sustained|undecided/ : /steady|damped|undecided/,
    );
    if (!text.includes('undecided')) sides[above ? 'above' : 'below'] += 1;
  }
  expect(sides.below).toBeGreaterThan(0);
  expect(sides.above).toBeGreaterThan(0);
}

async function onset(page: Page, studyId: string): Promise<void> {
  await page.goto(`/studies/${studyId}/onset`);
  const ribbon = page.getByRole('img', { name: /Observed at/ }).first();
  await expect(ribbon).toBeVisible();
  const name = (await ribbon.getAttribute('aria-label')) ?? (await ribbon.textContent()) ?? '';
  const [, low, high] = /Observed at [\d.]+ \(([\d.]+)\s*–\s*([\d.]+)\)/.exec(name) ?? [];
  expect(Number(low), name).toBeLessThan(trueOnset);
  expect(Number(high), name).toBeGreaterThan(trueOnset);
  await expect(page.getByRole('heading', { name: /^The onset .* prediction\.$/ })).toBeVisible();
  await expect(page.getByText(/ observed at .*, predicted at /)).toBeVisible();
}

/** The next levels replace what has not begun; the head is asked where they leave the envelope. */
async function replan(investigator: Page, head: Page, studyId: string, old: SessionRow[]) {
  await test.step('next levels', async () => {
    await investigator.getByRole('button', { name: 'Propose next levels' }).click();
    await investigator.getByLabel('Levels an onset').fill('2');
    await investigator.getByRole('button', { name: 'Propose next levels' }).click();
    await investigator.waitForURL(/\/series$/, { timeout: JOB_MS });
    const draft = investigator.getByRole('heading', { name: /^Version 2: .* a draft\.$/ });
    await expect(draft).toBeVisible();
  });
  await test.step('their approval', async () => {
    await investigator.getByRole('button', { name: 'Ask for approval' }).click();
    const approved = investigator.getByRole('link', { name: 'Lay out the sessions' });
    const waiting = investigator.getByText('It waits for the lab head.');
    await expect(approved.or(waiting)).toBeVisible();
    if (await waiting.isVisible()) await approve(head, title);
  });
  await test.step('the new version is laid out in the place of the old', async () => {
    await investigator.goto(`/studies/${studyId}/sessions`);
    await investigator.getByRole('button', { name: /^Lay out/ }).click();
    const gone = investigator.locator(`a[href="/sessions/${old[0]?.id}"]`);
    await expect(gone).toHaveCount(0, { timeout: JOB_MS });
    const now = await sessionsOf(investigator, studyId);
    const ids = new Set(now.map((s) => s.id));
    expect(old.filter((s) => ids.has(s.id))).toEqual([]);
    const fresh = now.filter((s) => s.state === 'planned');
    expect(fresh.length).toBeGreaterThan(0);
    await inList(investigator, fresh[0]?.id ?? '');
    for (const s of old) {
      await expect(investigator.locator(`a[href="/sessions/${s.id}"]`)).toHaveCount(0);
    }
  });
}
