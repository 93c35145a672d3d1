import { expect, type Page } from '@playwright/test';

export type CsvFile = { name: string; content: string };

/** Declares how the reactor's files are read: decimal commas, minutes since the dose was set. */
export async function declare(page: Page, value: { column: string; readout: string }) {
  await page.getByLabel('Between columns').selectOption({ label: 'Semicolon ;' });
  await page.getByLabel('Decimal mark').selectOption({ label: 'Comma: 1,25' });
  await page.getByLabel('Time column').selectOption('elapsed_min');
  await page.getByLabel('It holds').selectOption({ label: 'Time since the dose was set' });
  await page.getByLabel('Unit of time').selectOption('min');
  await page.getByLabel(value.column, { exact: true }).selectOption(value.readout);
}

export async function chooseFile(page: Page, { name, content }: CsvFile): Promise<void> {
  await page
    .getByLabel('File', { exact: true })
    .setInputFiles({ name, mimeType: 'text/csv', buffer: Buffer.from(content) });
}

/** Uploads one file for the run that the page was opened on; returns what the page says of it. */
export async function upload(page: Page, file: CsvFile): Promise<string> {
  await chooseFile(page, file);
  await declare(page, { column: 'product', readout: 'product' });
  await page.getByRole('button', { name: 'Upload', exact: true }).click();
  const said = page.getByText(/\d+ readings? kept/);
  await expect(said).toBeVisible();
  return (await said.textContent()) ?? '';
}
