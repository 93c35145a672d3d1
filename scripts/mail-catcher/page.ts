import type { CaughtAttachment, CaughtMessage } from './store';

const style = `
:root { color-scheme: light dark; font: 16px/1.5 system-ui, sans-serif; }
body { max-width: 60rem; margin: 0 auto; padding: 1.5rem; }
h1 { font-size: 1.3rem; } h2 { font-size: 1.05rem; }
table { width: 100%; border-collapse: collapse; }
th, td { padding: .5rem .75rem .5rem 0; text-align: left; vertical-align: top; }
tr { border-bottom: 1px solid color-mix(in srgb, currentColor 20%, transparent); }
th { font-weight: 600; } td.when { white-space: nowrap; font-variant-numeric: tabular-nums; }
pre { white-space: pre-wrap; overflow-wrap: anywhere; font: .95rem/1.5 ui-monospace, monospace; }
iframe { width: 100%; height: 30rem; border: 1px solid; background: #fff; }
dl { display: grid; grid-template-columns: max-content 1fr; gap: .25rem 1rem; } dd { margin: 0; }
`;

/** All that was caught, newest first. */
export function listPage(messages: CaughtMessage[], total: number): string {
  const rows = messages.map(
    (message) => `<tr><td class="when">${when(message)}</td><td>${text(message.to.join(', '))}</td>
<td><a href="/messages/${message.id}">${text(message.subject || '(no subject)')}</a>${
      message.attachments.length > 0 ? ` · ${message.attachments.length} attached` : ''
    }</td></tr>`,
  );
  const more = total > messages.length ? `<p>The newest ${messages.length} of ${total}.</p>` : '';
  const table = `<table><thead><tr><th scope="col">Caught (UTC)</th><th scope="col">To</th><th scope="col">Subject</th></tr></thead>
<tbody>${rows.join('\n')}</tbody></table>`;
  return page(
    'Caught mail',
    `<h1>Caught mail</h1>
<p>What Swaypoint would have mailed. Nothing here has left this machine. Reload to see what is new.</p>
${messages.length === 0 ? '<p>No mail yet.</p>' : table}${more}`,
  );
}

/** One message with all its parts. */
export function messagePage(message: CaughtMessage): string {
  const attachments = message.attachments.map((part, index) => attached(message.id, part, index));
  return page(
    message.subject,
    `<p><a href="/">All caught mail</a></p>
<h1>${text(message.subject || '(no subject)')}</h1>
<dl><dt>From</dt><dd>${text(message.from)}</dd><dt>To</dt><dd>${text(message.to.join(', '))}</dd>
<dt>Caught</dt><dd>${when(message)} UTC</dd>
<dt>File</dt><dd><a href="/messages/${message.id}.eml">the message as it came</a></dd></dl>
<pre>${text(message.text)}</pre>
${message.html === null ? '' : `<h2>As formatted</h2><iframe sandbox title="The formatted message" srcdoc="${text(message.html)}"></iframe>`}
${attachments.length === 0 ? '' : `<h2>Attached</h2>${attachments.join('\n')}`}`,
  );
}

/** Said when an address leads nowhere. */
export function missingPage(): string {
  return page('Not here', '<h1>Not here</h1><p><a href="/">All caught mail</a></p>');
}

function attached(id: string, part: CaughtAttachment, index: number): string {
  const link = `<p><a href="/messages/${id}/attachments/${index}">${text(part.name)}</a> (${text(part.type)}, ${part.sizeBytes} bytes)</p>`;
  const readable = part.type.startsWith('text/') && part.sizeBytes < 100_000;
  return readable ? `${link}<pre>${text(part.content.toString('utf8'))}</pre>` : link;
}

function page(title: string, body: string): string {
  return `<!doctype html><html lang="en"><head><meta charset="utf-8"><title>${text(title)}</title>
<meta name="viewport" content="width=device-width"><style>${style}</style></head><body><main>${body}</main></body></html>`;
}

function when(message: CaughtMessage): string {
  return text(message.receivedAt.replace('T', ' ').replace(/\.\d+Z$/, ''));
}

const entities: Record<string, string> = {
  '&': '&amp;',
  '<': '&lt;',
  '>': '&gt;',
  '"': '&quot;',
  "'": '&#39;',
};

function text(value: string): string {
  return value.replaceAll(/[&<>"']/g, (sign) => entities[sign] ?? sign);
}
