import { writeFileSync } from 'node:fs';
import { type Browser, expect, type Page, test } from '@playwright/test';
import { inList, putLater } from './support/calendar';
import { laidOut, movable } from './support/laid-out';
import { idIn, pageOf, person } from './support/people';
import { chooseFile, declare } from './support/readings';
import { fillNewStudy } from './support/study';

const unknown = '01900000-0000-7000-8000-000000000000';
const limits = { ceiling: '4', largestStep: '1' };
const fresh = (words: string) => `${words} ${Date.now().toString(36)}`;

test('a wrong password is told, and the address stays', async ({ page }) => {
  await page.goto('/sign-in');
  await page.getByLabel('Address').fill(person('observer').email);
  await page.getByLabel('Password').fill('not-the-password');
  await page.getByRole('button', { name: 'Sign in' }).click();
  const said = page.getByRole('alert').filter({ hasText: 'do not belong together' });
  await expect(said).toBeVisible();
  await expect(page.getByLabel('Address')).toHaveValue(person('observer').email);
  await expect(page).toHaveURL(/\/sign-in/);
});

test('a session that ends under an open form loses nothing', async ({ browser }) => {
  const page = await pageOf(browser, person('investigator'));
  const title = fresh('Written while the session ended');
  await fillNewStudy(page, { title, ...limits });
  const cookies = await page.context().cookies();
  await page.context().clearCookies();
  await page.getByRole('button', { name: 'Start the study' }).click();
  const said = page.getByRole('alert').filter({ hasText: 'Your session has ended' });
  await expect(said).toContainText('Nothing was saved');
  await expect(page.getByLabel('Title')).toHaveValue(title);
  await expect(page.getByLabel('Stop rules')).toHaveValue(/The extract clots/);
  const other = await page.context().newPage();
  await other.goto('/studies');
  await expect(other).toHaveURL(/\/sign-in\?why=expired/);
  await expect(other.getByText('Your session has ended. Sign in again to go on.')).toBeVisible();
  await page.context().addCookies(cookies);
  await page.getByRole('button', { name: 'Start the study' }).click();
  await expect(page.getByRole('heading', { name: title, level: 1 })).toBeVisible();
});

test('an id that is not this lab’s is answered as one that never was', async ({ browser }) => {
  const page = await pageOf(browser, person('head'));
  for (const path of [`/studies/${unknown}/prediction`, `/sessions/${unknown}`, '/studies/none']) {
    const answer = await page.goto(path);
    expect(answer?.status(), path).toBe(404);
    await expect(
      page.getByRole('heading', { name: 'There is nothing at this address' }),
    ).toBeVisible();
  }
  const job = await page.request.get(`/api/v1/jobs/${unknown}`);
  expect(job.status()).toBe(404);
  expect(job.headers()['content-type']).toContain('application/problem+json');
  expect(await job.json()).toMatchObject({ code: 'not-found', status: 404 });
});

test('two presses start one study', async ({ browser }) => {
  const page = await pageOf(browser, person('investigator'));
  const title = fresh('Pressed twice');
  await fillNewStudy(page, { title, ...limits });
  await page.getByRole('button', { name: 'Start the study' }).dblclick();
  await expect(page.getByRole('heading', { name: title, level: 1 })).toBeVisible();
  await page.goto('/studies');
  await expect(page.getByRole('link', { name: title })).toHaveCount(1);
});

test('an equation that blows up is told at its field', async ({ browser }) => {
  const page = await pageOf(browser, person('investigator'));
  await fillNewStudy(page, { title: fresh('Blows up'), ...limits });
  await page.getByRole('button', { name: 'Start the study' }).click();
  const equation = page.getByLabel('Equation of P');
  // P starts at 0.1 mmol/L: there the right-hand side divides by zero.
  await equation.fill('k*(a*F + (P/S)^2*F - P)/(P - 0.1)');
  await page.getByLabel('What changed and why').fill('A term that cannot be worked out');
  await page.getByRole('button', { name: 'Save', exact: true }).click();
  await expect(equation).toHaveAttribute('aria-invalid', 'true');
  await expect(equation).toHaveAccessibleDescription(/division by zero|undefined/);
  await expect(equation).toBeFocused();
  await equation.fill('k*(a*F + (P/S)^2*F - P');
  await page.getByRole('button', { name: 'Save', exact: true }).click();
  await expect(equation).toHaveAccessibleDescription(/\)/);
  await expect(page.getByText(/Saved as System v/)).toHaveCount(0);
});

/** The readings of the demo study whose series is half-way. */
async function readings(browser: Browser): Promise<Page> {
  const page = await pageOf(browser, person('technician'));
  await page.goto('/studies');
  await page.getByRole('link', { name: 'Repressor ring under inhibitor' }).first().click();
  await page.getByRole('link', { name: /^Readings/ }).click();
  await expect(page.getByRole('heading', { name: 'Upload readings' })).toBeVisible();
  return page;
}

test('a malformed file is accounted for row by row', async ({ browser }) => {
  const page = await readings(browser);
  const rows = ['elapsed_min;signal', '0,5;abc', 'soon;12,1', '1,5', '2.5;3'];
  await chooseFile(page, { name: 'broken.csv', content: rows.join('\n') });
  const readout = await firstReadout(page);
  await declare(page, { column: 'signal', readout });
  await page.getByRole('button', { name: 'Upload', exact: true }).click();
  await expect(page.getByRole('alert').filter({ hasText: 'Nothing was kept' })).toBeVisible();
  const account = page.getByRole('table', { name: 'Rows that were refused' });
  for (const text of ['abc', 'soon']) {
    await expect(account.getByRole('row').filter({ hasText: text })).toBeVisible();
  }
  await expect(page.getByLabel('Decimal mark')).toHaveValue(',');
});

async function firstReadout(page: Page): Promise<string> {
  const option = page.getByLabel('signal', { exact: true }).locator('option').nth(1);
  return (await option.getAttribute('value')) ?? '';
}

test('a file of more than 50 MB is refused at once', async ({ browser }, info) => {
  const page = await readings(browser);
  const path = info.outputPath('long.csv');
  writeFileSync(path, Buffer.alloc(51 * 1024 * 1024, '0,5;1,25\n'));
  await page.getByLabel('File', { exact: true }).setInputFiles(path);
  await page.getByRole('button', { name: 'Upload', exact: true }).click();
  const file = page.getByLabel('File', { exact: true });
  await expect(file).toHaveAccessibleDescription(/larger than 50 MB/);
  await expect(file).toBeFocused();
  const began = Date.now();
  const answer = await page.request.post(`/api/v1/studies/${idIn(page.url())}/uploads`, {
    headers: { origin: new URL(page.url()).origin },
    multipart: {
      runId: unknown,
      mapping: '{}',
      file: { name: 'long.csv', mimeType: 'text/csv', buffer: Buffer.alloc(51 * 1024 * 1024, '1') },
    },
  });
  expect(answer.status()).toBe(413);
  expect(await answer.json()).toMatchObject({ code: 'too-large', at: 'file' });
  expect(Date.now() - began).toBeLessThan(10_000);
});

test('of two who move one session at once the second is told by whom', async ({ browser }) => {
  const { sessions } = await laidOut(browser);
  const session = movable(sessions);
  const first = await pageOf(browser, person('investigator'));
  const second = await pageOf(browser, person('head'));
  for (const page of [first, second]) {
    const item = await inList(page, session.id);
    await item.getByRole('button', { name: /^Move run/ }).click();
  }
  const kept = await putLater(first, 5);
  await first.getByRole('button', { name: 'Move the session' }).click();
  await expect(first.getByText('Moved.', { exact: true })).toBeVisible();
  await putLater(second, 10);
  await second.getByRole('button', { name: 'Move the session' }).click();
  const said = second.getByRole('alert').filter({ hasText: 'changed this session meanwhile' });
  await expect(said).toContainText(person('investigator').name);
  await expect(said).toContainText('Nothing was overwritten');
  await expect(await inList(second, session.id)).toContainText(kept);
});
