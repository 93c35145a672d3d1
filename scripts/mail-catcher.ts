import { parseArgs } from 'node:util';
import { SMTPServer } from 'smtp-server';
import { MailStore } from './mail-catcher/store';
import { catcherWeb } from './mail-catcher/web';

/**
 * A mail server that delivers nothing: it keeps each message as a file and shows it on a small page.
 * Both listen on 127.0.0.1 alone.
 *
 *   node dist/mail-catcher.mjs --folder <path> --smtp-port <n> --web-port <n>
 */
const largestMessageBytes = 50_000_000;

const { values } = parseArgs({
  options: {
    folder: { type: 'string' },
    'smtp-port': { type: 'string' },
    'web-port': { type: 'string' },
  },
});
const folder = values.folder ?? '.data/mail';
const store = new MailStore(folder);

const smtp = new SMTPServer({
  banner: 'Swaypoint keeps this mail on this machine',
  disabledCommands: ['AUTH', 'STARTTLS'],
  disableReverseLookup: true,
  size: largestMessageBytes,
  onData(stream, session, callback) {
    const parts: Buffer[] = [];
    stream.on('data', (part: Buffer) => parts.push(part));
    stream.on('end', () => {
      if (stream.sizeExceeded) {
        callback(new Error('The message is too large.'));
        return;
      }
      const { mailFrom, rcptTo } = session.envelope;
      const from = mailFrom === false ? '' : mailFrom.address;
      const to = rcptTo.map((recipient) => recipient.address);
      store.add(Buffer.concat(parts), { from, to }, new Date()).then(
        () => callback(),
        (error: Error) => callback(error),
      );
    });
  },
});
smtp.on('error', (error) => console.error(`Mail catcher: ${error.message}`));

const web = catcherWeb(store);
smtp.listen(Number(values['smtp-port'] ?? 3025), '127.0.0.1');
web.listen(Number(values['web-port'] ?? 3026), '127.0.0.1');

for (const signal of ['SIGINT', 'SIGTERM'] as const) {
  process.once(signal, () => {
    web.closeAllConnections();
    web.close();
    smtp.close(() => process.exit(0));
    setTimeout(() => process.exit(0), 2000).unref();
  });
}
