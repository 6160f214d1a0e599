import type { Transporter } from 'nodemailer'
import nodemailer from 'nodemailer'

/** A server that does not answer gives way to the next try well before the job that tries it runs out. */
const patience = { connectionTimeout: 8_000, greetingTimeout: 8_000, socketTimeout: 12_000, dnsTimeout: 8_000 }

export interface TransportOptions { /** Shorter in tests. */ timeoutMs?: number }

/** A way to the mail server at `smtp://…` or `smtps://…`. What a mail holds never reads a file or fetches an address. */
export function openTransport(url: string, { timeoutMs }: TransportOptions = {}): Transporter {
  const timeouts = timeoutMs ? { connectionTimeout: timeoutMs, greetingTimeout: timeoutMs, socketTimeout: timeoutMs, dnsTimeout: timeoutMs } : patience
  return nodemailer.createTransport({ url, ...timeouts, disableFileAccess: true, disableUrlAccess: true })
}

let own: { url: string, transport: Transporter } | null = null
let localUrl: string | null = null

/** Where mail goes while SMTP_URL is unset. */
export function useLocalMailServer(port: number): void {
  localUrl = `smtp://127.0.0.1:${port}?ignoreTLS=true`
}

/** The server's own way to its mail server, from SMTP_URL or the local one. */
export function useTransport(): Transporter {
  const url = process.env.SMTP_URL || localUrl
  if (!url) throw new Error('There is no mail server: SMTP_URL is unset and the local one does not run.')
  if (own?.url !== url) own = { url, transport: openTransport(url) }
  return own.transport
}
