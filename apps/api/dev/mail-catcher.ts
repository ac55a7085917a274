import { createServer, type ServerResponse } from 'node:http'
import { simpleParser, type ParsedMail } from 'mailparser'
import { SMTPServer } from 'smtp-server'

/**
 * Takes every e-mail that the house sends and keeps it in memory for reading: nothing leaves this machine.
 * `mail-catcher.ts <SMTP port> <page port>`; the page also answers `/messages.json` for programs.
 */

/** More than a day of the demo sends; older ones make room. */
const KEPT = 500
const LOOPBACK = '127.0.0.1'

interface Message {
  readonly id: number
  readonly receivedAt: string
  readonly from: string
  readonly to: readonly string[]
  readonly subject: string
  readonly text: string
  readonly attachments: readonly { name: string; bytes: number }[]
}

const messages: Message[] = []
let lastId = 0

function keep(mail: ParsedMail, from: string, to: readonly string[]): void {
  lastId += 1
  messages.unshift({
    id: lastId,
    receivedAt: new Date().toISOString(),
    from: mail.from?.text ?? from,
    to,
    subject: mail.subject ?? '(no subject)',
    text: mail.text ?? '',
    attachments: mail.attachments.map((part) => ({
      name: part.filename ?? part.contentType,
      bytes: part.size,
    })),
  })
  messages.splice(KEPT)
}

const smtp = new SMTPServer({
  disabledCommands: ['AUTH', 'STARTTLS'],
  size: 10 * 1024 * 1024,
  onData(stream, session, done) {
    const sender = session.envelope.mailFrom
    const to = session.envelope.rcptTo.map((recipient) => recipient.address)
    simpleParser(stream).then(
      (mail) => {
        keep(mail, sender === false ? '' : sender.address, to)
        done()
      },
      (error: unknown) => done(error instanceof Error ? error : new Error(String(error))),
    )
  },
})

const ENTITIES: Readonly<Record<string, string>> = {
  '&': '&amp;',
  '<': '&lt;',
  '>': '&gt;',
  '"': '&quot;',
  "'": '&#39;',
}
const escape = (text: string) => text.replace(/[&<>"']/g, (character) => ENTITIES[character] ?? character)

const STYLE = `
  :root { color-scheme: light dark; --ink: #1b2430; --linen: #f6f3ec; --paper: #fff; --line: #d9d2c3; --brass: #80560c }
  @media (prefers-color-scheme: dark) {
    :root { --ink: #f0ece2; --linen: #141b24; --paper: #1d2632; --line: #3a4656; --brass: #e0b45c }
  }
  body { margin: 0 auto; max-width: 60rem; padding: 1.5rem; background: var(--linen); color: var(--ink);
    font: 1rem/1.5 Roboto, system-ui, sans-serif }
  h1 { font-size: 1.4rem } a { color: var(--brass) }
  article, li { background: var(--paper); border: 1px solid var(--line); border-radius: .5rem; padding: .75rem 1rem }
  ul { list-style: none; padding: 0; display: grid; gap: .5rem }
  li a { display: block; font-weight: 600; min-height: 1.75rem } small { opacity: .8; overflow-wrap: anywhere }
  pre { white-space: pre-wrap; overflow-wrap: anywhere; font: inherit } dt { font-weight: 600 } dd { margin: 0 0 .4rem }
`

function page(title: string, body: string): string {
  return `<!doctype html><html lang="en"><head><meta charset="utf-8"><title>${escape(title)}</title>
<meta name="viewport" content="width=device-width, initial-scale=1"><style>${STYLE}</style></head><body>${body}</body></html>`
}

function listPage(): string {
  const rows = messages.map(
    (mail) => `<li><a href="/messages/${mail.id}">${escape(mail.subject)}</a>
<small>${escape(mail.receivedAt)} · to ${escape(mail.to.join(', '))}</small></li>`,
  )
  const list =
    rows.length === 0 ? '<p>Nothing yet. What the house sends appears here.</p>' : `<ul>${rows.join('')}</ul>`
  return page(
    'Caught mail',
    `<h1>Caught mail</h1><p>Kept in memory on this machine; none of it was sent on.</p>${list}`,
  )
}

function messagePage(mail: Message): string {
  const parts = mail.attachments.map((part) => `${escape(part.name)} (${part.bytes} bytes)`).join(', ')
  return page(
    mail.subject,
    `<p><a href="/">All mail</a></p><article><h1>${escape(mail.subject)}</h1><dl>
<dt>From</dt><dd>${escape(mail.from)}</dd><dt>To</dt><dd>${escape(mail.to.join(', '))}</dd>
<dt>Received</dt><dd>${escape(mail.receivedAt)}</dd>${parts === '' ? '' : `<dt>Attached</dt><dd>${parts}</dd>`}</dl>
<pre>${escape(mail.text)}</pre></article>`,
  )
}

function send(response: ServerResponse, status: number, type: string, body: string): void {
  response.writeHead(status, {
    'content-type': `${type}; charset=utf-8`,
    'content-security-policy': "default-src 'none'; style-src 'unsafe-inline'",
  })
  response.end(body)
}

const http = createServer((request, response) => {
  const path = request.url ?? '/'
  if (path === '/') return send(response, 200, 'text/html', listPage())
  if (path === '/messages.json') return send(response, 200, 'application/json', JSON.stringify(messages))
  const mail = messages.find((one) => path === `/messages/${one.id}`)
  if (mail !== undefined) return send(response, 200, 'text/html', messagePage(mail))
  send(
    response,
    404,
    'text/html',
    page('Not found', '<p>There is no such page. <a href="/">All mail</a></p>'),
  )
})

const [smtpPort, pagePort] = process.argv.slice(2).map(Number)
if (!smtpPort || !pagePort) throw new Error('usage: mail-catcher.ts <SMTP port> <page port>')
smtp.listen(smtpPort, LOOPBACK)
http.listen(pagePort, LOOPBACK)
for (const signal of ['SIGTERM', 'SIGINT'] as const)
  process.once(signal, () => {
    http.close()
    http.closeAllConnections()
    smtp.close(() => process.exit(0))
  })
