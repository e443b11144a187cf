import 'server-only';
import nodemailer from 'nodemailer';
import { localMailbox } from '@/fakes/mailbox/transport';
import { env } from '@/server/env/env';

type Outgoing = {
  from: string;
  to: { name: string; address: string };
  subject: string;
  text: string;
  messageId: string;
};
type Mailer = { sendMail: (mail: Outgoing & { disableFileAccess: true; disableUrlAccess: true }) => Promise<unknown> };

let mailer: Mailer | null = null;

/** Hands one mail to the mail server of SMTP_URL, or to the local mailbox. Throws what the server answered. */
export async function deliver(mail: { id: string; to: string; subject: string; text: string }): Promise<void> {
  const { smtpUrl, mailFrom, dataDir } = env();
  mailer ??= smtpUrl
    ? nodemailer.createTransport({ url: smtpUrl, connectionTimeout: 10_000, socketTimeout: 20_000 })
    : nodemailer.createTransport(localMailbox(dataDir));
  await mailer.sendMail({
    from: mailFrom,
    to: { name: '', address: mail.to },
    subject: mail.subject,
    text: mail.text,
    messageId: `<${mail.id}@kelvinleaf.local>`,
    disableFileAccess: true,
    disableUrlAccess: true,
  });
}
