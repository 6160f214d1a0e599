/** What a template gives: the same words as text and as HTML, nothing to be fetched from anywhere. */
export interface Letter { subject: string, text: string, html: string }

export interface LetterParts {
  subject: string
  /** First line, large. */
  heading: string
  paragraphs: readonly string[]
  /** Label and value, one line each. */
  facts?: readonly (readonly [label: string, value: string])[]
  list?: { title: string, lines: readonly string[], none: string }[]
  button?: { label: string, address: string }
  closing?: string
}

const entities: Record<string, string> = { '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;', '\'': '&#39;' }
const escapeHtml = (text: string) => text.replace(/[&<>"']/g, sign => entities[sign]!)

/** A line break in a subject would begin a new header. */
// eslint-disable-next-line no-control-regex
const oneLine = (text: string) => text.replace(/[\u0000-\u001F\u007F]+/g, ' ').trim()

/** Sets the parts as text and as HTML; every text is escaped here and nowhere else. */
export function composeLetter(parts: LetterParts): Letter {
  return { subject: oneLine(parts.subject), text: asText(parts), html: asHtml(parts) }
}

function asText({ heading, paragraphs, facts = [], list = [], button, closing }: LetterParts): string {
  const width = Math.max(0, ...facts.map(([label]) => label.length))
  const blocks = [
    heading,
    ...paragraphs,
    facts.map(([label, value]) => `${`${label}:`.padEnd(width + 2)}${value}`).join('\n'),
    ...list.map(({ title, lines, none }) => `${title}\n${lines.length > 0 ? lines.map(line => `- ${line}`).join('\n') : none}`),
    button ? `${button.label}:\n${button.address}` : '',
    closing ?? '',
  ]
  return `${blocks.filter(block => block !== '').join('\n\n')}\n`
}

function asHtml({ subject, heading, paragraphs, facts = [], list = [], button, closing }: LetterParts): string {
  const e = escapeHtml
  const blocks = [
    `<h1 style="font-size:20px;margin:0 0 16px">${e(heading)}</h1>`,
    ...paragraphs.map(paragraph => `<p style="margin:0 0 12px">${e(paragraph)}</p>`),
    facts.length > 0
      ? `<table style="border-collapse:collapse;margin:0 0 16px">${facts.map(([label, value]) => `<tr><th scope="row" style="text-align:left;font-weight:normal;color:#555;padding:2px 16px 2px 0;vertical-align:top">${e(label)}</th><td style="padding:2px 0">${e(value)}</td></tr>`).join('')}</table>`
      : '',
    ...list.map(({ title, lines, none }) => `<h2 style="font-size:16px;margin:16px 0 8px">${e(title)}</h2>${lines.length > 0 ? `<ul style="margin:0 0 12px;padding-left:20px">${lines.map(line => `<li>${e(line)}</li>`).join('')}</ul>` : `<p style="margin:0 0 12px">${e(none)}</p>`}`),
    button ? `<p style="margin:16px 0"><a href="${e(button.address)}" style="display:inline-block;padding:10px 16px;background:#1d5c8a;color:#fff;text-decoration:none;border-radius:4px">${e(button.label)}</a></p><p style="margin:0 0 12px;color:#555">${e(button.address)}</p>` : '',
    closing ? `<p style="margin:16px 0 0;color:#555">${e(closing)}</p>` : '',
  ]
  return `<!doctype html><html lang="en"><head><meta charset="utf-8"><title>${e(oneLine(subject))}</title></head><body style="font-family:sans-serif;font-size:15px;line-height:1.5;color:#111;background:#fff;margin:24px;max-width:640px">${blocks.join('')}</body></html>`
}
