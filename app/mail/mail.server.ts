import { createTransport } from 'nodemailer'
import { environment } from '../env.server.ts'

type Mail = { to: string; subject: string; text: string }

/** Hands one message to the site's SMTP server. Rejects when the server does not take it within five seconds. */
export async function sendMail(mail: Mail): Promise<void> {
  const { SMTP_URL, MAIL_FROM } = environment()
  const transport = createTransport({
    url: SMTP_URL,
    connectionTimeout: 5_000,
    greetingTimeout: 5_000,
    socketTimeout: 5_000,
  })
  await transport.sendMail({ from: MAIL_FROM, ...mail })
}
