import { expect } from '@playwright/test';

const catcher = process.env.SWAYPOINT_MAIL_URL ?? 'http://127.0.0.1:3026';
/** The worker looks once a second; a mail is there within this. */
const MAIL_MS = 20_000;

export type CaughtMail = {
  to: string[];
  subject: string;
  text: string;
  attachments: { name: string; type: string; path: string }[];
};

async function mailsTo(address: string): Promise<CaughtMail[]> {
  const response = await fetch(`${catcher}/messages.json?to=${encodeURIComponent(address)}`);
  return (await response.json()) as CaughtMail[];
}

/** The newest mail to an address whose subject is this, once it has come. */
export async function mailTo(address: string, subject: RegExp): Promise<CaughtMail> {
  let found: CaughtMail | undefined;
  await expect
    .poll(
      async () => {
        found = (await mailsTo(address)).find((m) => subject.test(m.subject));
        return found !== undefined;
      },
      { timeout: MAIL_MS, message: `a mail to ${address} with the subject ${subject}` },
    )
    .toBe(true);
  return found as CaughtMail;
}

/** The calendar file of a mail, its folded lines put together again (RFC 5545, section 3.1). */
export async function calendarOf(mail: CaughtMail): Promise<string> {
  const file = mail.attachments.find((a) => a.name.endsWith('.ics'));
  expect(file, 'a calendar file is attached').toBeDefined();
  const response = await fetch(`${catcher}${file?.path}`);
  return (await response.text()).replaceAll(/\r?\n[ \t]/g, '');
}
