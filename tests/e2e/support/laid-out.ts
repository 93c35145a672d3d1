import { type Browser, expect } from '@playwright/test';
import { type SessionRow, sessionsOf } from './bench';
import { giveAllHours } from './lab';
import { pageOf, person } from './people';
import { approve, askApproval, createStudy, design, JOB_MS, predict } from './study';

export type LaidOut = { studyId: string; title: string; sessions: SessionRow[] };
let made: Promise<LaidOut> | undefined;

async function make(browser: Browser): Promise<LaidOut> {
  const title = `Feed series for moving ${Date.now().toString(36)}`;
  const head = await pageOf(browser, person('head'));
  await giveAllHours(head, person('technician').name);
  const page = await pageOf(browser, person('investigator'));
  const studyId = await createStudy(page, { title, ceiling: '4', largestStep: '4' });
  await predict(page, studyId, 20);
  await design(page, studyId, { levels: 1, doubt: '1', settleHours: '0.5', recordHours: '0.5' });
  await askApproval(page);
  await approve(head, title);
  await page.goto(`/studies/${studyId}/sessions`);
  await page.getByRole('button', { name: 'Lay out the sessions' }).click();
  const table = page.getByRole('table', { name: /^Sessions of this study/ });
  await expect(table).toBeVisible({ timeout: JOB_MS });
  const sessions = await sessionsOf(page, studyId);
  await Promise.all([head.context().close(), page.context().close()]);
  return { studyId, title, sessions };
}

/** A study whose sessions are on the calendar, made once by the pages as its people would. */
export function laidOut(browser: Browser): Promise<LaidOut> {
  made ??= make(browser);
  return made;
}

/**
 * The last collecting of the series: it may wait for hours, and nothing of the same preparation or
 * person comes after it.
 */
export function movable(sessions: SessionRow[]): SessionRow {
  const found = sessions.findLast((s) => s.what.startsWith('Collect'));
  if (!found) throw new Error('nothing is collected in this series');
  return found;
}
