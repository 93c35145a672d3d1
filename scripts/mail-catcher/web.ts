import { createServer, type IncomingMessage, type Server, type ServerResponse } from 'node:http';
import { listPage, messagePage, missingPage } from './page';
import type { CaughtMessage, MailStore } from './store';

const newestShown = 200;

type Answer = { status: number; type: string; body: string | Buffer; download?: string };

/** Shows what was caught, to this machine alone. Addresses: `/`, `/messages.json`, `/messages/<id>`. */
export function catcherWeb(store: MailStore): Server {
  return createServer((request, response) => {
    answer(request, store)
      .catch((error: unknown): Answer => ({ status: 500, type: 'text/plain', body: String(error) }))
      .then((given) => send(response, given));
  });
}

async function answer(request: IncomingMessage, store: MailStore): Promise<Answer> {
  // A page elsewhere could point its own name at 127.0.0.1 and read the mail in our reader's browser.
  const host = (request.headers.host ?? '').replace(/:\d+$/, '');
  if (host !== '127.0.0.1' && host !== 'localhost') {
    return { status: 421, type: 'text/plain', body: 'Ask for 127.0.0.1.' };
  }
  if (request.method !== 'GET' && request.method !== 'HEAD') {
    return { status: 405, type: 'text/plain', body: 'Mail can only be read here.' };
  }
  const url = new URL(request.url ?? '/', 'http://127.0.0.1');
  if (url.pathname === '/') {
    const total = (await store.ids()).length;
    return html(200, listPage(await store.newest(newestShown), total));
  }
  if (url.pathname === '/messages.json') return json(store, url.searchParams.get('to'));
  return oneMessage(store, url.pathname);
}

async function json(store: MailStore, to: string | null): Promise<Answer> {
  const messages = await store.newest(Number.POSITIVE_INFINITY);
  const wanted = messages.filter((message) => to === null || message.to.includes(to));
  return {
    status: 200,
    type: 'application/json',
    body: JSON.stringify(wanted.map(plain)),
  };
}

function plain(message: CaughtMessage) {
  return {
    ...message,
    attachments: message.attachments.map(({ content, ...part }, index) => ({
      ...part,
      text: part.type.startsWith('text/') ? content.toString('utf8') : null,
      path: `/messages/${message.id}/attachments/${index}`,
    })),
  };
}

async function oneMessage(store: MailStore, path: string): Promise<Answer> {
  const [, id = '', ending, index] =
    /^\/messages\/([\w-]+)(?:(\.eml)|\/attachments\/(\d+))?$/.exec(path) ?? [];
  if (ending !== undefined) {
    const raw = await store.raw(id);
    if (raw !== null)
      return { status: 200, type: 'message/rfc822', body: raw, download: `${id}.eml` };
  }
  const message = await store.read(id);
  if (message === null) return html(404, missingPage());
  if (index === undefined) return html(200, messagePage(message));
  const part = message.attachments[Number(index)];
  if (part === undefined) return html(404, missingPage());
  return { status: 200, type: part.type, body: part.content, download: part.name };
}

const html = (status: number, body: string): Answer => ({ status, type: 'text/html', body });

function send(response: ServerResponse, given: Answer): void {
  const type = given.type.startsWith('text/') ? `${given.type}; charset=utf-8` : given.type;
  response.setHeader('Content-Type', type);
  response.setHeader('X-Content-Type-Options', 'nosniff');
  response.setHeader('Cache-Control', 'no-store');
  response.setHeader(
    'Content-Security-Policy',
    "default-src 'none'; style-src 'unsafe-inline'; img-src data:; frame-ancestors 'none'",
  );
  if (given.download !== undefined) {
    const name = encodeURIComponent(given.download);
    response.setHeader('Content-Disposition', `attachment; filename*=UTF-8''${name}`);
  }
  response.writeHead(given.status).end(given.body);
}
