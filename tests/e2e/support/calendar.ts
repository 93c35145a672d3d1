import { expect, type Locator, type Page } from '@playwright/test';
import { DateTime } from 'luxon';

/** Opens a view of the calendar by its own keys. */
export async function openCalendar(page: Page, view: 'List' | 'Week'): Promise<void> {
  await page.goto('/calendar');
  const key = page.getByRole('navigation', { name: 'View' }).getByRole('link', { name: view });
  await key.click();
  await expect(key).toHaveAttribute('aria-current', 'page');
}

/** The line of a session in a list. */
export const itemOf = (page: Page, sessionId: string): Locator =>
  page
    .getByRole('main')
    .getByRole('listitem')
    .filter({ has: page.locator(`a[href="/sessions/${sessionId}"]`) });

/** A session in the list; steps a week on where this week does not have it. */
export async function inList(page: Page, sessionId: string): Promise<Locator> {
  await openCalendar(page, 'List');
  const item = itemOf(page, sessionId);
  if ((await item.count()) === 0) await nextWeek(page);
  await expect(item).toBeVisible();
  return item;
}

export async function nextWeek(page: Page): Promise<void> {
  const before = page.url();
  await page.getByRole('navigation', { name: 'Time' }).getByRole('link', { name: 'Later' }).click();
  await expect(page).not.toHaveURL(before);
}

/** Puts the open form of a session to this many minutes later; returns the new time of the clock. */
export async function putLater(page: Page, minutes: number): Promise<string> {
  const day = page.getByLabel('Day', { exact: true });
  const begins = page.getByLabel(/^Begins/);
  const now = DateTime.fromISO(`${await day.inputValue()}T${await begins.inputValue()}`);
  const then = now.plus({ minutes });
  await day.fill(then.toFormat('yyyy-MM-dd'));
  await begins.fill(then.toFormat('HH:mm'));
  return then.toFormat('HH:mm');
}
