import { expect, type Page } from '@playwright/test';
import { idIn } from './people';

/** Calculations end within this on a busy machine. */
export const JOB_MS = 90_000;

export type Wanted = {
  title: string;
  ceiling: string;
  largestStep: string;
};

/** Fills the form of a new study on the flow reactor, which records by itself. */
export async function fillNewStudy(page: Page, wanted: Wanted): Promise<void> {
  await page.goto('/studies/new');
  await page.getByLabel('Model', { exact: true }).selectOption('Glycolysis in a fed extract');
  await page.getByLabel('Title').fill(wanted.title);
  const rig = page.getByLabel('Rig', { exact: true });
  const flow = await rig.locator('option', { hasText: 'Flow reactor 1' }).textContent();
  await rig.selectOption({ label: flow ?? '' });
  await page.getByLabel('Ceiling dose').fill(wanted.ceiling);
  await page.getByLabel('Largest step').fill(wanted.largestStep);
  await page.getByLabel('Stop rules').fill('The extract clots, or the vessel leaks.');
}

export async function createStudy(page: Page, wanted: Wanted): Promise<string> {
  await fillNewStudy(page, wanted);
  await page.getByRole('button', { name: 'Start the study' }).click();
  await page.waitForURL(/\/studies\/[0-9a-f-]{36}\/system$/);
  await expect(page.getByRole('heading', { name: wanted.title, level: 1 })).toBeVisible();
  return idIn(page.url());
}

/** Asks for a prediction and waits for its finding. */
export async function predict(page: Page, studyId: string, draws: number): Promise<void> {
  await page.goto(`/studies/${studyId}/prediction`);
  await page.getByLabel('Draws').fill(String(draws));
  await page.getByRole('button', { name: 'Predict', exact: true }).click();
  await expect(page.getByRole('button', { name: 'Predict again' })).toBeVisible({
    timeout: JOB_MS,
  });
}

export type Series = {
  levels: number;
  doubt: string;
  settleHours: string;
  recordHours: string;
};

/** A climb with one preparation towards the lower onset; returns once its draft is shown. */
export async function design(page: Page, studyId: string, series: Series): Promise<void> {
  await page.goto(`/studies/${studyId}/series`);
  const onsets = page.getByRole('group', { name: 'Look for the onset at' }).getByRole('checkbox');
  await expect(onsets).toHaveCount(2);
  await onsets.nth(1).uncheck();
  await page.getByLabel('Scheme').selectOption('climb');
  await page.getByLabel('Order').selectOption('ascending');
  await page.getByLabel('Levels an onset').fill(String(series.levels));
  await page.getByLabel('Preparations', { exact: true }).fill('1');
  await page.getByLabel('Model doubt').fill(series.doubt);
  await page.getByLabel('Settle at most').fill(series.settleHours);
  await page.getByLabel('Record at most').fill(series.recordHours);
  await page.getByRole('button', { name: 'Choose the levels' }).click();
  await expect(page.getByRole('heading', { name: /^Version \d+: .* a draft\.$/ })).toBeVisible({
    timeout: JOB_MS,
  });
}

export async function askApproval(page: Page): Promise<void> {
  await page.getByRole('button', { name: 'Ask for approval' }).click();
  await expect(page.getByText('It waits for the lab head.')).toBeVisible();
}

/** The head finds the request under Today and approves it. */
export async function approve(page: Page, title: string): Promise<void> {
  await page.goto('/today');
  const waits = page.locator('section', {
    has: page.getByRole('heading', { name: 'Waits for you' }),
  });
  await waits.getByRole('link').filter({ hasText: title }).click();
  await page.getByLabel('Words to the author').fill('Go ahead; look again at the far side.');
  await page.getByRole('button', { name: /^Approve version/ }).click();
  await expect(page.getByRole('heading', { name: /^Version \d+: .* approved\.$/ })).toBeVisible();
}
