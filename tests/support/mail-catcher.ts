import { once } from 'node:events'
import type { AddressInfo } from 'node:net'
import { type ParsedMail, simpleParser } from 'mailparser'
import { SMTPServer } from 'smtp-server'

export type MailCatcher = { port: number; messages: ParsedMail[]; close: () => Promise<void> }

/** A real SMTP server on this machine that keeps what it is handed and sends nothing on. */
export async function startMailCatcher(
  port = 0,
  onMail?: (mail: { to: string; subject: string }) => void,
): Promise<MailCatcher> {
  const messages: ParsedMail[] = []
  const smtp = new SMTPServer({
    authOptional: true,
    disabledCommands: ['STARTTLS'],
    onData(stream, _session, callback) {
      simpleParser(stream).then((mail) => {
        messages.push(mail)
        const to = [mail.to ?? []].flat().map(({ text }) => text)
        onMail?.({ to: to.join(', '), subject: mail.subject ?? '' })
        callback()
      }, callback)
    },
  })
  smtp.listen(port, '127.0.0.1')
  await once(smtp.server, 'listening')
  const address = smtp.server.address() as AddressInfo
  return { port: address.port, messages, close: () => new Promise((resolve) => smtp.close(resolve)) }
}
