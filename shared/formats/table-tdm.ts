import type { ServedTable } from './published-table'

/** CCSDS 503.0-B-2, section 4: without the line's end. */
const LONGEST_LINE = 254
const COMMENT_WIDTH = 100

/**
 * A published tuning table as a CCSDS Tracking Data Message in keyword notation (CCSDS 503.0-B-2), marked as a plan.
 *
 * Participant 1 is the station, participant 2 the spacecraft. An uplink's rows are TRANSMIT_FREQ_1 with TRANSMIT_FREQ_RATE_1
 * (section 3.5: the frequency at the time tag, and its slope until the next). The standard has no keyword for what
 * a receiver is set to: a downlink's rows are RECEIVE_FREQ_1, whose comments say that nothing was received. A receiver
 * that ramps has two records a row, its setting at the row's start and a millisecond before the next one's, since
 * RECEIVE_FREQ has no rate. Frequencies are sky frequencies, behind a converter too; a time tag is the instant of effect,
 * `latencyMs` after the JSON's `at`. Keywords, their order, ASCII and line length are the standard's.
 */
export function tableTdm(table: ServedTable): string {
  const { link, pass } = table
  const records = link.direction === 'uplink' ? transmitted(table) : received(table)
  const lastMs = records.at(-1)!.atMs
  return [
    'CCSDS_TDM_VERS = 2.0',
    ...comments([...planComments(table), ...identityComments(table), table.caution]),
    `CREATION_DATE = ${timeTag(Date.parse(table.publishedAt))}`,
    'ORIGINATOR = NULLBEAT',
    `MESSAGE_ID = ${asciiName(`${table.id}-revision-${table.revision}`)}`,
    'META_START',
    ...comments(meaningComments(table)),
    'TIME_SYSTEM = UTC',
    `START_TIME = ${timeTag(records[0]!.atMs)}`,
    `STOP_TIME = ${timeTag(Math.max(lastMs, Date.parse(pass.los)))}`,
    `PARTICIPANT_1 = ${asciiName(pass.station.name)}`,
    `PARTICIPANT_2 = ${asciiName(pass.spacecraft.name)}`,
    'MODE = SEQUENTIAL',
    `PATH = ${pathOf(table)}`,
    ...(link.turnaround ? [`TURNAROUND_NUMERATOR = ${link.turnaround.numerator}`, `TURNAROUND_DENOMINATOR = ${link.turnaround.denominator}`] : []),
    `TIMETAG_REF = ${link.direction === 'uplink' ? 'TRANSMIT' : 'RECEIVE'}`,
    'META_STOP',
    'DATA_START',
    ...comments([`Planned settings of ${link.direction === 'uplink' ? 'the transmitter' : 'the receiver, not received frequencies'}, Hz${link.direction === 'uplink' ? ' and Hz/s' : ''}.`]),
    ...records.map(({ keyword, atMs, value }) => `${keyword} = ${timeTag(atMs)} ${decimal(value)}`),
    'DATA_STOP',
    '',
  ].join('\n')
}

interface TdmRecord { readonly keyword: string, readonly atMs: number, readonly value: number }

/** The rows as they are on the sky, from the instants of effect on. */
function skyRows({ radio, retunes }: ServedTable) {
  const sign = radio.converter?.inverts ? -1 : 1
  return retunes.map(({ at, frequencyHz, slopeHzPerS }) => ({
    atMs: Math.round(Date.parse(at) + radio.latencyMs),
    skyHz: (radio.converter?.loHz ?? 0) + sign * frequencyHz,
    slopeHzPerS: sign * slopeHzPerS,
  }))
}

const transmitted = (table: ServedTable): TdmRecord[] => skyRows(table).flatMap(({ atMs, skyHz, slopeHzPerS }) => [
  { keyword: 'TRANSMIT_FREQ_1', atMs, value: skyHz },
  { keyword: 'TRANSMIT_FREQ_RATE_1', atMs, value: slopeHzPerS },
])

const rampsDown = (table: ServedTable) => table.retunes.some(({ slopeHzPerS }) => slopeHzPerS !== 0)

function received(table: ServedTable): TdmRecord[] {
  const rows = skyRows(table)
  const keyword = 'RECEIVE_FREQ_1'
  if (!rampsDown(table)) return rows.map(({ atMs, skyHz }) => ({ keyword, atMs, value: skyHz }))
  return rows.flatMap(({ atMs, skyHz, slopeHzPerS }, i) => {
    const endMs = i + 1 < rows.length ? rows[i + 1]!.atMs - 1 : Date.parse(table.pass.los)
    const start = { keyword, atMs, value: skyHz }
    return endMs > atMs ? [start, { keyword, atMs: endMs, value: skyHz + slopeHzPerS * (endMs - atMs) / 1000 }] : [start]
  })
}

/** Along which way the signal goes: a coherent downlink begins at the station. */
const pathOf = ({ link }: ServedTable) => link.direction === 'uplink' ? '1,2' : link.turnaround ? '1,2,1' : '2,1'

const planComments = (table: ServedTable) => [
  `PLAN, NOT A MEASUREMENT: frequencies that the station's ${table.link.direction === 'uplink' ? 'transmitter' : 'receiver'} is to be set to. Nothing in this message was observed.`,
]

const identityComments = ({ id, revision, digest, signature, verdict, worstResidualHz, allowanceHz, pass, link, elementSet, supersedes }: ServedTable) => [
  `Table ${id}`,
  `Revision ${revision}${supersedes ? `, supersedes revision ${supersedes.revision}` : ''}`,
  `Digest ${digest}`,
  'The digest is the SHA-256 of the canonical JSON (RFC 8785) of the same revision, without digest and signature.',
  `Signature ${signature}`,
  'The signature is a detached JWS (RFC 7515, EdDSA) over those bytes, not over this message.',
  `Pass ${pass.id}: spacecraft ${pass.spacecraft.catalogueNumber ?? 'without catalogue number'}, AOS ${pass.aos}, culmination ${pass.culmination} at ${decimal(pass.maxElevationDeg)} deg, LOS ${pass.los}`,
  `Link ${link.name}: ${link.direction}, carrier ${decimal(link.carrierHz)} Hz, symbol rate ${decimal(link.symbolRateHz)} Hz`,
  `Verdict ${verdict}: worst residual ${decimal(worstResidualHz)} Hz of ${decimal(allowanceHz)} Hz that the link bears`,
  `Element set SHA-256 ${elementSet.sha256}`,
]

function meaningComments(table: ServedTable): string[] {
  const { link, radio } = table
  const dial = radio.converter
    ? `The radio stands behind a converter and is set to ${radio.converter.inverts ? `${decimal(radio.converter.loHz)} Hz minus sky frequency; slopes change sign` : `sky frequency minus ${decimal(radio.converter.loHz)} Hz`}.`
    : 'The radio is set to the sky frequency itself.'
  const uplink = 'TRANSMIT_FREQ_1 is what the station is to transmit from its time tag on, so that the spacecraft hears the carrier; TRANSMIT_FREQ_RATE_1 is its slope until the next.'
  const steps = 'RECEIVE_FREQ_1 is what the station\'s receiver is to be set to, held until the next time tag; the last one to the end.'
  const ramps = 'RECEIVE_FREQ_1 is what the station\'s receiver is to be set to; between two records of one row, start and end, the setting runs straight.'
  const coherent = link.turnaround
    ? [`The spacecraft turns the uplink round; ${link.turnaround.uplinkPrecompensated ? 'the uplink is taken to be pre-compensated, so the downlink shows the one-way shift only' : 'the uplink is taken to be sent at its nominal frequency, so the downlink shows both shifts'}.`]
    : []
  return [
    link.direction === 'uplink' ? uplink : rampsDown(table) ? ramps : steps,
    `All frequencies are sky frequencies. ${dial}`,
    `A time tag is the instant of effect at the station: command ${decimal(radio.latencyMs)} ms earlier.`,
    ...coherent,
  ]
}

/** Year, month, day and time to the millisecond; UTC is said by TIME_SYSTEM. */
const timeTag = (utcMs: number) => new Date(utcMs).toISOString().slice(0, -1)

/** Fixed point, within the sixteen digits of section 4: the sixth decimal of a hertz is beyond any radio's step. */
function decimal(value: number): string {
  const text = value.toFixed(6).replace(/\.?0{1,6}$/, '')
  return text === '-0' ? '0' : text
}

/** Printable ASCII: letters lose their accents, what has no likeness becomes a question mark. */
const ascii = (text: string) => text.normalize('NFKD').replace(/\p{M}/gu, '').replace(/[‘’]/g, '\'').replace(/[“”]/g, '"').replace(/[–—−]/g, '-').replace(/[^ -~]/gu, '?').trim() || '?'
/** A name as a value: in one case, within a line. */
const asciiName = (text: string) => ascii(text).toUpperCase().slice(0, 200)

/** Comment lines, broken at blanks, and inside a word only where it is longer than a line. */
function comments(texts: readonly string[]): string[] {
  const most = LONGEST_LINE - 'COMMENT '.length
  return texts.flatMap((text) => {
    const lines: string[] = []
    for (const word of ascii(text).split(/ +/)) {
      const last = lines.at(-1)
      // A label stays beside what it names, such as a signature.
      const width = last?.includes(' ') ? COMMENT_WIDTH : most
      if (last !== undefined && last.length + 1 + word.length <= width) lines[lines.length - 1] = `${last} ${word}`
      else for (let at = 0; at < word.length; at += most) lines.push(word.slice(at, at + most))
    }
    return lines.map(line => `COMMENT ${line}`)
  })
}
