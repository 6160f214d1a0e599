/**
 * A reader of Tracking Data Messages in keyword notation, written from the rules of CCSDS 503.0-B-2 (June 2020; tables 3-2, 3-3 and
 * 3-5, section 4; from memory) and from nothing of the product. It throws where a rule is broken.
 */
export interface TdmRecord { keyword: string, at: number, value: number }
export interface Tdm { header: Record<string, string>, metadata: Record<string, string>, comments: { header: string[], metadata: string[], data: string[] }, records: TdmRecord[] }

/** Table 3-2, in its order; the obligatory ones. */
const headerOrder = ['CCSDS_TDM_VERS', 'CREATION_DATE', 'ORIGINATOR', 'MESSAGE_ID']
const headerObligatory = ['CCSDS_TDM_VERS', 'CREATION_DATE', 'ORIGINATOR']
/** Table 3-3, in its order. */
const metadataOrder = [
  'TRACK_ID', 'DATA_TYPES', 'TIME_SYSTEM', 'START_TIME', 'STOP_TIME', 'PARTICIPANT_1', 'PARTICIPANT_2', 'PARTICIPANT_3', 'PARTICIPANT_4', 'PARTICIPANT_5', 'MODE', 'PATH', 'PATH_1', 'PATH_2',
  'EPHEMERIS_NAME_1', 'EPHEMERIS_NAME_2', 'TRANSMIT_BAND', 'RECEIVE_BAND', 'TURNAROUND_NUMERATOR', 'TURNAROUND_DENOMINATOR', 'TIMETAG_REF', 'INTEGRATION_INTERVAL', 'INTEGRATION_REF', 'FREQ_OFFSET',
  'RANGE_MODE', 'RANGE_MODULUS', 'RANGE_UNITS', 'ANGLE_TYPE', 'REFERENCE_FRAME', 'INTERPOLATION', 'INTERPOLATION_DEGREE', 'DOPPLER_COUNT_BIAS', 'DOPPLER_COUNT_SCALE', 'DOPPLER_COUNT_ROLLOVER',
  'TRANSMIT_DELAY_1', 'TRANSMIT_DELAY_2', 'RECEIVE_DELAY_1', 'RECEIVE_DELAY_2', 'DATA_QUALITY', 'CORRECTIONS_APPLIED',
]
const metadataObligatory = ['TIME_SYSTEM', 'PARTICIPANT_1']
const metadataValues: Record<string, RegExp> = {
  TIME_SYSTEM: /^(UTC|TAI|GPS|UT1|TDB|TT|SCLK)$/, MODE: /^(SEQUENTIAL|SINGLE_DIFF)$/, PATH: /^[1-5](,[1-5])+$/, TIMETAG_REF: /^(TRANSMIT|RECEIVE)$/,
  TURNAROUND_NUMERATOR: /^\d+$/, TURNAROUND_DENOMINATOR: /^\d+$/,
}
/** Of table 3-5, those that a plan may hold; hertz are positive, hertz a second have either sign. */
const dataValues: Record<string, RegExp> = { TRANSMIT_FREQ: /^\d+(\.\d+)?$/, RECEIVE_FREQ: /^\d+(\.\d+)?$/, TRANSMIT_FREQ_RATE: /^-?\d+(\.\d+)?$/ }

function need(holds: unknown, what: string): asserts holds {
  if (!holds) throw new Error(what)
}

function readTime(text: string): number {
  need(/^\d{4}-\d{2}-\d{2}T\d{2}:\d{2}:\d{2}(\.\d+)?Z?$/.test(text), `not a calendar time tag: ${text}`)
  const at = Date.parse(text.endsWith('Z') ? text : `${text}Z`)
  need(Number.isFinite(at), `no such time: ${text}`)
  return at
}

const assignment = (line: string): [string, string] => {
  const [, keyword, value] = /^([A-Z0-9_]+) *= *(\S.*)$/.exec(line) ?? []
  need(keyword && value, `not "keyword = value": ${line}`)
  return [keyword, value.trim()]
}

function readSection(lines: string[], order: string[], obligatory: string[], where: string): Record<string, string> {
  const found: Record<string, string> = {}
  let last = -1
  for (const line of lines) {
    const [keyword, value] = assignment(line)
    const place = order.indexOf(keyword)
    need(place >= 0, `${keyword} does not belong in the ${where}`)
    need(place > last, `${keyword} is out of order or twice in the ${where}`)
    last = place
    found[keyword] = value
  }
  for (const keyword of obligatory) need(keyword in found, `${keyword} is missing in the ${where}`)
  return found
}

/** Comments stand together, before all else of their section (in the header after the version). */
function takeComments(lines: string[]): { comments: string[], rest: string[] } {
  const first = lines.findIndex(line => !/^COMMENT\b/.test(line))
  const count = first < 0 ? lines.length : first
  const rest = lines.slice(count)
  need(!rest.some(line => /^COMMENT\b/.test(line)), 'a comment stands where none may')
  return { comments: lines.slice(0, count).map(line => line.replace(/^COMMENT ?/, '')), rest }
}

export function readTdm(text: string): Tdm {
  const lines = text.split(/\r\n|\n|\r/)
  need(lines.pop() === '', 'the last line has no end')
  for (const line of lines) {
    need(line.length <= 254, `a line of ${line.length} characters: ${line.slice(0, 60)}`)

    need(/^[\x20-\x7E]*$/.test(line), `a character that is not printable ASCII: ${line}`)
  }
  const at = (mark: string) => {
    need(lines.filter(line => line === mark).length === 1, `${mark} is there ${lines.filter(line => line === mark).length} times`)
    return lines.indexOf(mark)
  }
  const [metaStart, metaStop, dataStart, dataStop] = [at('META_START'), at('META_STOP'), at('DATA_START'), at('DATA_STOP')]
  need(metaStart < metaStop && metaStop + 1 === dataStart && dataStart < dataStop && dataStop === lines.length - 1, 'the sections are out of order')
  need(lines[0] === 'CCSDS_TDM_VERS = 2.0', 'the first line is not the version')

  const inHeader = takeComments(lines.slice(1, metaStart))
  const header = readSection([lines[0], ...inHeader.rest], headerOrder, headerObligatory, 'header')
  readTime(header.CREATION_DATE!)
  const inMetadata = takeComments(lines.slice(metaStart + 1, metaStop))
  const metadata = readSection(inMetadata.rest, metadataOrder, metadataObligatory, 'metadata')
  for (const [keyword, value] of Object.entries(metadata)) {
    need(metadataValues[keyword]?.test(value) ?? true, `${keyword} may not be ${value}`)
    if (/^PARTICIPANT/.test(keyword)) need(value === value.toUpperCase() || value === value.toLowerCase(), `${keyword} mixes upper and lower case`)
  }
  for (const index of metadata.PATH?.split(',') ?? []) need(`PARTICIPANT_${index}` in metadata, `the path names participant ${index}, who is not there`)
  need(metadata.MODE === undefined || metadata.MODE !== 'SEQUENTIAL' || 'PATH' in metadata, 'a sequential mode without its path')
  need(('TURNAROUND_NUMERATOR' in metadata) === ('TURNAROUND_DENOMINATOR' in metadata), 'half a turnaround ratio')

  const inData = takeComments(lines.slice(dataStart + 1, dataStop))
  const lastOf = new Map<string, number>()
  const records = inData.rest.map((line) => {
    const [keyword, text] = assignment(line)
    const [, kind, index] = /^(.+)_([1-5])$/.exec(keyword) ?? []
    need(kind && kind in dataValues && `PARTICIPANT_${index}` in metadata, `${keyword} is no keyword of the data section, or of nobody`)
    const [time, value, ...more] = text.split(/ +/)
    need(time && value && more.length === 0 && dataValues[kind]!.test(value), `${keyword} has no time tag and value: ${text}`)
    need(value.replace(/\D/g, '').length <= 16, `more than sixteen digits: ${value}`)
    const when = readTime(time)
    need(when > (lastOf.get(keyword) ?? -Infinity), `${keyword} is not in order of time: ${time}`)
    need(!('START_TIME' in metadata) || when >= readTime(metadata.START_TIME!), `${time} is before START_TIME`)
    need(!('STOP_TIME' in metadata) || when <= readTime(metadata.STOP_TIME!), `${time} is after STOP_TIME`)
    lastOf.set(keyword, when)
    return { keyword, at: when, value: Number(value) }
  })
  need(records.length > 0, 'no data')
  return { header, metadata, comments: { header: inHeader.comments, metadata: inMetadata.comments, data: inData.comments }, records }
}

/** The frequency at an instant from TRANSMIT_FREQ_n and TRANSMIT_FREQ_RATE_n: from the newest record on, along its rate (zero where none). */
export function transmittedAt({ records }: Tdm, at: number): number {
  const newest = (keyword: string) => records.filter(record => record.keyword === keyword && record.at <= at).at(-1)
  const frequency = newest('TRANSMIT_FREQ_1')!
  const rate = newest('TRANSMIT_FREQ_RATE_1')
  return frequency.value + (rate && rate.at >= frequency.at ? rate.value : 0) * (at - frequency.at) / 1000
}
