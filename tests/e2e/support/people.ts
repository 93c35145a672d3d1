import { type Browser, type BrowserContext, expect, type Page } from '@playwright/test';
import { demoPassword, demoPeople } from '@/db/seed/people';

export type Person = { key: string; name: string; email: string };
export const password = demoPassword;

/** Somebody of the demo lab by key: head, investigator, technician, late, observer. */
export function person(key: string): Person {
  const found = demoPeople.find((p) => p.key === key);
  if (!found) throw new Error(`the demo lab has no ${key}`);
  return found;
}

/** The first id in an address. */
export const idIn = (url: string): string => {
  const [id] = /[0-9a-f]{8}-[0-9a-f-]{27}/.exec(url) ?? [];
  if (!id) throw new Error(`no id in ${url}`);
  return id;
};

export async function signIn(page: Page, who: Person): Promise<void> {
  await page.goto('/sign-in');
  await page.getByLabel('Address').fill(who.email);
  await page.getByLabel('Password').fill(password);
  await page.getByRole('button', { name: 'Sign in' }).click();
  await expect(page.getByRole('heading', { name: 'Today', level: 1 })).toBeVisible();
}

type Kept = Awaited<ReturnType<BrowserContext['storageState']>>;
const kept = new Map<string, Kept>();

/**
 * A page of somebody's own browser, signed in. An address rests after ten sign-ins in a quarter of an
 * hour, so a sign-in is kept and used again.
 */
export async function pageOf(browser: Browser, who: Person): Promise<Page> {
  const context = await browser.newContext({ storageState: kept.get(who.key) });
  const page = await context.newPage();
  if (!kept.has(who.key)) {
    await signIn(page, who);
    kept.set(who.key, await context.storageState());
  }
  return page;
}
