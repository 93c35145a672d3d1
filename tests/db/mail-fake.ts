import type { AddressInfo } from 'node:net';
import { simpleParser } from 'mailparser';
import nodemailer from 'nodemailer';
import { SMTPServer } from 'smtp-server';

export type Received = {
  to: string;
  subject: string;
  messageId: string;
  text: string;
  ical: string;
};

/**
 * A real SMTP server on a port of its own that keeps what it receives. `refuse` decides, mail by
 * mail, whether it answers with a temporary failure; `pauseMs` makes it slow.
 */
export async function startMailFake(refuse: (to: string) => boolean = () => false, pauseMs = 0) {
  const mails: Received[] = [];
  const refused: string[] = [];
  const server = new SMTPServer({
    authOptional: true,
    disabledCommands: ['STARTTLS', 'AUTH'],
    onData(stream, session, done) {
      simpleParser(stream)
        .then(async (mail) => {
          if (pauseMs > 0) await new Promise((resolve) => setTimeout(resolve, pauseMs));
          const to = session.envelope.rcptTo[0]?.address ?? '';
          if (refuse(to)) {
            refused.push(mail.messageId ?? '');
            done(Object.assign(new Error('try later'), { responseCode: 451 }));
            return;
          }
          const ical = mail.attachments.find((a) => a.contentType.includes('calendar'));
          mails.push({
            to,
            subject: mail.subject ?? '',
            messageId: mail.messageId ?? '',
            text: mail.text ?? '',
            ical: ical?.content.toString('utf8') ?? '',
          });
          done();
        })
        .catch(done);
    },
  });
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const { port } = server.server.address() as AddressInfo;
  const transport = nodemailer.createTransport(
    { host: '127.0.0.1', port, connectionTimeout: 3000, socketTimeout: 5000 },
    { from: 'Swaypoint <swaypoint@localhost>' },
  );
  const stop = async () => {
    transport.close();
    await new Promise<void>((resolve) => server.close(() => resolve()));
  };
  return { mails, refused, transport, stop };
}
