export interface MailAddress { name: string, address: string }

/** Who the product's mail comes from: MAIL_FROM, as `Name <address>` or a bare address. */
export function sender(text = process.env.MAIL_FROM || 'Nullbeat <nullbeat@nullbeat.example>'): MailAddress {
  const [, name, address] = /^\s*"?([^"<]*?)"?\s*<([^<>\s]+@[^<>\s]+)>\s*$/.exec(text) ?? []
  return address ? { name: name || 'Nullbeat', address } : { name: 'Nullbeat', address: text.trim() }
}

/** The address of one of the product's pages, as a reader of a mail opens it. */
export function pageAddress(path: `/${string}`): string {
  return `${(process.env.PUBLIC_URL || 'http://127.0.0.1:3000').replace(/\/$/, '')}${path}`
}
