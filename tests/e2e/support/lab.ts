import { expect, type Page } from '@playwright/test';

/** Two stretches that together leave no minute of any day out. */
const stretches = [
  { from: '00:00', until: '23:55' },
  { from: '12:00', until: '11:55' },
];

/** As head: somebody may work at any hour of any day, whatever the clock says when the test runs. */
export async function giveAllHours(page: Page, name: string): Promise<void> {
  await page.goto('/lab/hours');
  const plate = plateOf(page, name);
  if ((await allHours(page, name).count()) > 0) return;
  for (const [i, { from, until }] of stretches.entries()) {
    await plate.getByRole('button', { name: 'Add hours' }).click();
    for (const day of ['Sat', 'Sun']) await plate.getByLabel(day, { exact: true }).check();
    await plate.getByLabel('From', { exact: true }).fill(from);
    await plate.getByLabel('Until', { exact: true }).fill(until);
    await plate.getByRole('button', { name: 'Add', exact: true }).click();
    await expect(allHours(page, name)).toHaveCount(i + 1);
  }
}

/** Takes them back, so that later sessions are not laid into the night. */
export async function takeAllHours(page: Page, name: string): Promise<void> {
  await page.goto('/lab/hours');
  const rows = allHours(page, name);
  for (let left = await rows.count(); left > 0; left -= 1) {
    await rows
      .first()
      .getByRole('button', { name: /^Remove / })
      .click();
    await expect(rows).toHaveCount(left - 1);
  }
}

const plateOf = (page: Page, name: string) =>
  page
    .getByRole('main')
    .locator('section')
    .filter({ has: page.getByRole('heading', { name, exact: true }) });

const allHours = (page: Page, name: string) =>
  plateOf(page, name)
    .getByRole('listitem')
    .filter({ hasText: /23:55|11:55/ });
