/**
 * A strict reader of iCalendar objects, written from RFC 5545 (sections named beside the rules; from memory) and from nothing of
 * the product. It throws where a rule is broken.
 */
export interface IcsProperty { name: string, parameters: Record<string, string>, value: string }
export interface IcsComponent { name: string, properties: IcsProperty[], components: IcsComponent[] }

function need(holds: unknown, what: string): asserts holds {
  if (!holds) throw new Error(what)
}

/** Section 3.1: lines end in CR LF, are at most 75 octets without it, and go on where the next begins with a blank. */
function unfold(bytes: Uint8Array): string[] {
  const lines: number[][] = []
  let line: number[] = []
  for (let i = 0; i < bytes.length; i++) {
    if (bytes[i] === 0x0D && bytes[i + 1] === 0x0A) {
      need(line.length <= 75, `a line of ${line.length} octets`)
      if (line[0] === 0x20 || line[0] === 0x09) {
        need(lines.length > 0, 'the first line is a continuation')
        lines.at(-1)!.push(...line.slice(1))
      }
      else lines.push(line)
      line = []
      i++
    }
    else {
      need(bytes[i] !== 0x0D && bytes[i] !== 0x0A, 'a line ends in something else than CR LF')
      line.push(bytes[i]!)
    }
  }
  need(line.length === 0, 'the last line has no end')
  // Folding may cut between octets of one letter: decoded only when joined.
  return lines.map(octets => new TextDecoder('utf-8', { fatal: true }).decode(Uint8Array.from(octets)))
}

/** Section 3.1: name *(";" param "=" value) ":" value; parameter values quoted where they hold ; : or , */
function readLine(line: string): IcsProperty {
  // eslint-disable-next-line no-control-regex
  need(!/[\u0000-\u0008\u000A-\u001F\u007F]/.test(line), 'a control character')
  const parts = /^([A-Za-z0-9-]+)((?:;[A-Za-z0-9-]+=(?:"[^"]*"|[^";:,]*))*):(.*)$/.exec(line)
  need(parts, `no content line: ${line}`)
  const parameters = Object.fromEntries([...parts[2]!.matchAll(/;([A-Za-z0-9-]+)=("[^"]*"|[^";:,]*)/g)].map(([, name, value]) => [name!.toUpperCase(), value!.replace(/^"|"$/g, '')]))
  return { name: parts[1]!.toUpperCase(), parameters, value: parts[3]! }
}

function readComponent(lines: IcsProperty[], name: string): IcsComponent {
  const component: IcsComponent = { name, properties: [], components: [] }
  for (;;) {
    const line = lines.shift()
    need(line, `${name} does not end`)
    if (line.name === 'END') {
      need(line.value.toUpperCase() === name, `${name} ends as ${line.value}`)
      return component
    }
    if (line.name === 'BEGIN') component.components.push(readComponent(lines, line.value.toUpperCase()))
    else component.properties.push(line)
  }
}

/** Section 3.3.11: \\ \; \, \n are escapes; a bare backslash, semicolon or comma is none of TEXT. */
export function unescapeText(value: string): string {
  need(/^(?:[^\\;,]|\\[\\;,nN])*$/.test(value), `not escaped as a TEXT: ${value}`)
  return value.replace(/\\([\\;,nN])/g, (_, sign: string) => /n/i.test(sign) ? '\n' : sign)
}

/** Section 3.3.5, form 2: UTC. */
export function readUtc({ name, parameters, value }: IcsProperty): number {
  const parts = /^(\d{4})(\d{2})(\d{2})T(\d{2})(\d{2})(\d{2})Z$/.exec(value)
  need(parts && !('TZID' in parameters), `${name} is no UTC date-time: ${value}`)
  const [year, month, day, hour, minute, second] = parts.slice(1).map(Number) as [number, number, number, number, number, number]
  const at = Date.UTC(year, month - 1, day, hour, minute, second)
  need(new Date(at).toISOString().replace(/[-:]|\.000/g, '') === value, `no such time: ${value}`)
  return at
}

export interface IcsEvent { uid: string, sequence: number, stampedAt: number, startsAt: number, endsAt: number, summary: string, description: string, location: string, status: string, transparency: string, url: string | null }
export interface IcsCalendar { method: string, name: string | null, events: IcsEvent[] }

const textOf = (component: IcsComponent, name: string) => component.properties.filter(property => property.name === name)
function once(component: IcsComponent, name: string, obligatory = true): IcsProperty | null {
  const found = textOf(component, name)
  need(found.length <= 1, `${name} is in ${component.name} ${found.length} times`)
  need(!obligatory || found.length === 1, `${component.name} has no ${name}`)
  return found[0] ?? null
}

export function readIcs(bytes: Uint8Array): IcsCalendar {
  const lines = unfold(bytes).map(readLine)
  const first = lines.shift()
  need(first?.name === 'BEGIN' && first.value === 'VCALENDAR', 'it does not begin with BEGIN:VCALENDAR')
  const calendar = readComponent(lines, 'VCALENDAR')
  need(lines.length === 0, 'something follows END:VCALENDAR')
  // Section 3.6: PRODID and VERSION once, and at least one component; 3.7.4: the version is 2.0.
  need(once(calendar, 'PRODID')!.value !== '' && once(calendar, 'VERSION')!.value === '2.0', 'no product or version')
  const events = calendar.components.map((event): IcsEvent => {
    need(event.name === 'VEVENT', `a component ${event.name}`)
    // Section 3.6.1: UID and DTSTAMP once; DTSTART once; DTEND or DURATION, not both; the rest at most once.
    for (const name of ['UID', 'DTSTAMP', 'DTSTART']) once(event, name)
    need(textOf(event, 'DTEND').length + textOf(event, 'DURATION').length === 1, 'DTEND and DURATION, or neither')
    const text = (name: string) => unescapeText(once(event, name)!.value)
    const [startsAt, endsAt] = [readUtc(once(event, 'DTSTART')!), readUtc(once(event, 'DTEND')!)]
    // Section 3.8.2.2: later than the start.
    need(endsAt > startsAt, 'an event ends before it begins')
    const [sequence, status, transparency] = [once(event, 'SEQUENCE')!.value, once(event, 'STATUS')!.value, once(event, 'TRANSP')!.value]
    need(/^\d+$/.test(sequence), `SEQUENCE is no integer: ${sequence}`)
    need(/^(TENTATIVE|CONFIRMED|CANCELLED)$/.test(status), `STATUS of an event may not be ${status}`)
    need(/^(OPAQUE|TRANSPARENT)$/.test(transparency), `TRANSP may not be ${transparency}`)
    return { uid: text('UID'), sequence: Number(sequence), stampedAt: readUtc(once(event, 'DTSTAMP')!), startsAt, endsAt, summary: text('SUMMARY'), description: text('DESCRIPTION'), location: text('LOCATION'), status, transparency, url: once(event, 'URL', false)?.value ?? null }
  })
  need(new Set(events.map(({ uid }) => uid)).size === events.length, 'two events of one UID')
  const name = once(calendar, 'NAME', false)
  return { method: once(calendar, 'METHOD')!.value, name: name && unescapeText(name.value), events }
}
