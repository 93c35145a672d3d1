import { mkdir, readdir, readFile, rename, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { type AddressObject, simpleParser } from 'mailparser';

export type CaughtAttachment = {
  name: string;
  type: string;
  sizeBytes: number;
  content: Buffer;
};

export type CaughtMessage = {
  id: string;
  receivedAt: string;
  from: string;
  /** Everybody it was delivered to, hidden recipients included. */
  to: string[];
  subject: string;
  text: string;
  html: string | null;
  attachments: CaughtAttachment[];
};

export type Envelope = { from: string; to: string[] };

const fileName = /^[0-9TZ-]+-[0-9a-z]+\.eml$/;

/** Messages as they came, one .eml file each, in one folder. */
export class MailStore {
  private readonly parsed = new Map<string, CaughtMessage>();
  private count = 0;

  constructor(private readonly folder: string) {}

  /** Keeps a message; it can be read once the promise is fulfilled. @returns its id */
  async add(raw: Buffer, envelope: Envelope, now: Date): Promise<string> {
    await mkdir(this.folder, { recursive: true, mode: 0o700 });
    this.count += 1;
    const moment = now.toISOString().replaceAll(/[:.]/g, '-');
    const id = `${moment}-${process.pid.toString(36)}${this.count.toString(36).padStart(4, '0')}`;
    const path = join(this.folder, `${id}.eml`);
    const head =
      `X-Caught-At: ${now.toISOString()}\r\nX-Envelope-From: ${oneLine(envelope.from)}\r\n` +
      `X-Envelope-To: ${envelope.to.map(oneLine).join(', ')}\r\n`;
    await writeFile(`${path}.part`, Buffer.concat([Buffer.from(head), raw]), { mode: 0o600 });
    await rename(`${path}.part`, path);
    return id;
  }

  /** Ids, newest first. */
  async ids(): Promise<string[]> {
    const names = await readdir(this.folder).catch(() => []);
    return names
      .filter((name) => fileName.test(name))
      .map((name) => name.slice(0, -'.eml'.length))
      .sort()
      .reverse();
  }

  /** The newest messages, newest first. */
  async newest(limit: number): Promise<CaughtMessage[]> {
    const ids = (await this.ids()).slice(0, limit);
    const messages = await Promise.all(ids.map((id) => this.read(id)));
    return messages.filter((message) => message !== null);
  }

  /** One message; null when there is none of that id. */
  async read(id: string): Promise<CaughtMessage | null> {
    const known = this.parsed.get(id);
    if (known !== undefined) return known;
    const raw = await this.raw(id);
    if (raw === null) return null;
    const message = await parse(id, raw);
    this.parsed.set(id, message);
    return message;
  }

  /** The file as it came; null when there is none of that id. */
  async raw(id: string): Promise<Buffer | null> {
    if (!fileName.test(`${id}.eml`)) return null;
    return readFile(join(this.folder, `${id}.eml`)).catch(() => null);
  }
}

async function parse(id: string, raw: Buffer): Promise<CaughtMessage> {
  const mail = await simpleParser(raw, { skipImageLinks: true });
  const header = (name: string) => String(mail.headers.get(name) ?? '');
  return {
    id,
    receivedAt: header('x-caught-at'),
    from: mail.from?.text ?? header('x-envelope-from'),
    to: recipients(header('x-envelope-to'), mail.to),
    subject: mail.subject ?? '',
    text: mail.text ?? '',
    html: mail.html || null,
    attachments: mail.attachments.map((part, index) => ({
      name: part.filename ?? `part-${index + 1}`,
      type: part.contentType,
      sizeBytes: part.size,
      content: part.content,
    })),
  };
}

function recipients(envelope: string, to: AddressObject | AddressObject[] | undefined): string[] {
  if (envelope !== '') return envelope.split(', ');
  return [to ?? []].flat().flatMap((list) => list.value.map((one) => one.address ?? one.name));
}

const oneLine = (text: string) => text.replaceAll(/[\r\n]+/g, ' ');
