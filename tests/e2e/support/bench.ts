import { expect, type Page } from '@playwright/test';
import { idIn } from './people';

/** One row of the study's sessions. */
export type SessionRow = {
  id: string;
  run: number;
  dose: string;
  what: string;
  person: string;
  state: string;
};

const caption = 'Sessions of this study in order of time';

/** The sessions of a study as its page lists them, in order of time. */
export async function sessionsOf(page: Page, studyId: string): Promise<SessionRow[]> {
  await page.goto(`/studies/${studyId}/sessions`);
  const table = page.getByRole('table', { name: caption });
  await expect(table).toBeVisible();
  const rows = await table
    .getByRole('row')
    .filter({ has: page.getByRole('link') })
    .all();
  return Promise.all(
    rows.map(async (row) => {
      const link = row.getByRole('link').first();
      const cells = (await row.locator('th, td').allInnerTexts()).map((t) => t.trim());
      const [, run = '', dose = '', what = '', , who = '', state = ''] = cells;
      const id = idIn((await link.getAttribute('href')) ?? '');
      return { id, run: Number(run), dose, what, person: who, state };
    }),
  );
}

/** The figure of a dose as it is printed with its unit. */
export const figureOf = (text: string): string => /-?\d+(\.\d+)?/.exec(text)?.[0] ?? '';

/** Opens the session from Today and checks that preparation and rig are the right ones. */
export async function startFromToday(page: Page, sessionId: string): Promise<void> {
  await page.goto('/today');
  await page.getByRole('main').locator(`a[href="/sessions/${sessionId}"]`).click();
  await page.getByRole('button', { name: 'It is the right one' }).click();
}

/** Sets the dose as the card shows it, reads it back; returns what was read. */
export async function setDose(page: Page, sessionId: string, dose: string): Promise<number> {
  await startFromToday(page, sessionId);
  await expect(page.getByText(/^Never above /)).toBeVisible();
  await page.getByLabel('Read back from the rig', { exact: true }).fill(dose);
  await page.getByRole('button', { name: 'Dose is set' }).click();
  await expect(page.getByRole('heading', { name: 'Done. Everything is saved.' })).toBeVisible();
  return Number(dose);
}

/** Collects the record; leaves the page at the way to its upload. */
export async function collect(page: Page, sessionId: string): Promise<void> {
  await startFromToday(page, sessionId);
  await page.getByRole('button', { name: 'Record collected' }).click();
  await expect(page.getByRole('link', { name: 'Upload the readings' })).toBeVisible();
}
