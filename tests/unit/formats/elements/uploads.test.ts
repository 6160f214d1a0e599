import { createHash } from 'node:crypto'
import { describe, expect, it } from 'vitest'
import { readElements } from '#shared/formats/elements/read-elements'
import type { MeanElements } from '#shared/physics/types'
import { NOW_MS, mustRead, referenceBytes, referenceText } from './support'

/** Source: data/reference/uploads/manifest.json, made with independent programs (data/README.md). */
interface Manifest {
  referenceElements: Record<string, Record<string, string | number>>
  files: { file: string, bytes: number, expect: 'accept' | 'warn' | 'partial' | 'reject', usableSets: number }[]
}
const manifest = JSON.parse(referenceText('uploads/manifest.json')) as Manifest
const read = (file: string) => readElements(referenceBytes(`uploads/${file}`), { nowMs: NOW_MS, fileName: file })
const entry = (file: string) => manifest.files.find(f => f.file === file)!

/** Where the manifest leaves "accept with a warning, or refuse with a reason" open: what is done, and by which code. */
const WARNED: Record<string, string> = {
  'tle_checksum_missing.tle': 'checksum-missing',
  'tle_lower_case.tle': 'lower-case',
  'tle_name_long.tle': 'name-cut',
  'tle_non_ascii_name_latin1.tle': 'name-encoding',
  'tle_doy_366_nonleap.tle': 'epoch-day-366',
  'tle_epoch_future_4_years.tle': 'epoch-ahead',
  'tle_ecc_blank_padded.tle': 'blank-padded',
  'tle_duplicate_sets.tle': 'repeated',
  'tle_same_number_other_name.tle': 'repeated',
  'omm_missing_norad_id.json': 'no-catalogue-number',
  'omm_epoch_leap_second.json': 'leap-second',
  'omm_epoch_2057.json': 'epoch-ahead',
  'omm_epoch_local_ambiguous.json': 'epoch-blank',
  'omm_semicolon.csv': 'delimiter',
  'omm_lower_case_keywords.kvn': 'lower-case',
  'omm_utf16.xml': 'encoding',
  'omm_xml_in_json_name.json': 'file-name',
}

/** Refused: code, line, and what the reason has to name. */
const REFUSED: Record<string, [code: string, line: number, naming: RegExp]> = {
  'tle_bad_checksum_line1.tle': ['checksum', 2, /column 69 is "3".* give 2/],
  'tle_tabs_for_spaces.tle': ['character', 2, /Column 16 holds a tab.*fixed columns/],
  'tle_collapsed_spaces.tle': ['length', 2, /blanks in it were collapsed.*fixed columns/],
  'tle_missing_line2.tle': ['missing-line-2', 2, /Add its line 2/],
  'tle_missing_line1.tle': ['missing-line-1', 2, /Add its line 1/],
  'tle_unicode_minus.tle': ['character', 2, /Column 60 holds a minus sign U\+2212/],
  'tle_nbsp.tle': ['character', 2, /Column 2 holds a no-break space/],
  'tle_alpha5_invalid_I_O.tle': ['catalogue-number', 2, /"I0001".*leaves out I and O/],
  'tle_doy_000.tle': ['epoch', 2, /"000.50000000".*1 to 365/],
  'tle_doy_400.tle': ['epoch', 2, /"400.50000000".*1 to 365/],
  'tle_mean_motion_18.tle': ['out-of-range', 3, /Mean motion is 18.*17\.5/],
  'tle_mean_motion_negative.tle': ['out-of-range', 3, /Mean motion is -15\.2198765/],
  'tle_letters_in_number.tle': ['number', 3, /Inclination \(columns 9–16\).*Column 14 holds the letter O/],
  'tle_whitespace_only.tle': ['empty', 1, /empty/],
  'tle_html_login_page.tle': ['html', 1, /web page \(HTML\)/],
  'omm_Infinity_1e400.json': ['number', 6, /MEAN_MOTION reads "1e400".*finite/],
  'omm_ecc_negative.json': ['out-of-range', 7, /Eccentricity is -0\.1/],
  'omm_center_mars.json': ['convention', 9, /CENTER_NAME is "MARS"/],
  'omm_time_system_tai.json': ['convention', 11, /TIME_SYSTEM is "TAI".*UTC/],
  'omm_duplicate_keys.json': ['duplicate-keyword', 1, /"MEAN_MOTION" stands twice/],
  'omm_deep_nesting.json': ['json-limit', 1, /nested more than/],
  'omm_not_array_of_objects.json': ['not-an-object', 1, /a number where an object/],
  'omm_decimal_comma.csv': ['epoch', 2, /EPOCH reads "2026-11-30T12:17:46,665888".*decimal comma/],
  'omm_short_row.csv': ['columns', 3, /3 fields where the header has 17 fields/],
  'omm_no_header.csv': ['csv-header', 1, /does not name the columns.*OMM keywords/],
  'omm_semi_major_axis.kvn': ['theory', 13, /SEMI_MAJOR_AXIS stands in place of MEAN_MOTION/],
  'omm_repeated_keyword.kvn': ['duplicate-keyword', 27, /"MEAN_ANOMALY" stands twice.*lines 18 and 27/],
  'omm_billion_laughs.xml': ['xml-dtd', 2, /line 2, column 1.*DTD.*refused unread/],
  'omm_quadratic_blowup.xml': ['xml-dtd', 2, /line 2, column 1.*DTD.*refused unread/],
}

const TRANSPOSED = 'tle_digit_flipped_checksum_same.tle'

const numbers = (e: MeanElements) => ({
  EPOCH: e.epochUtcUs, MEAN_MOTION: e.meanMotionRevPerDay, ECCENTRICITY: e.eccentricity, INCLINATION: e.inclinationDeg,
  RA_OF_ASC_NODE: e.raanDeg, ARG_OF_PERICENTER: e.argPericenterDeg, MEAN_ANOMALY: e.meanAnomalyDeg, BSTAR: e.bstar,
  MEAN_MOTION_DOT: e.meanMotionDot, MEAN_MOTION_DDOT: e.meanMotionDdot, OBJECT_ID: e.designator, CLASSIFICATION_TYPE: e.classification,
  ELEMENT_SET_NO: e.elementSetNumber, REV_AT_EPOCH: e.revolutionAtEpoch,
})
const expected = (r: Record<string, string | number>) => {
  const { OBJECT_NAME: _n, NORAD_CAT_ID: _c, EPHEMERIS_TYPE: _t, EPOCH, ...rest } = r
  const [toMs, us] = [Date.parse(`${String(EPOCH).slice(0, 23)}Z`), Number(String(EPOCH).slice(23))]
  return { ...rest, EPOCH: toMs * 1000 + us }
}

describe('uploads of the reference set', () => {
  it('is whole and unchanged, as manifest and data/README.md have it', () => {
    const readme = referenceText('../README.md')
    expect(manifest.files).toHaveLength(73)
    for (const { file, bytes } of manifest.files) {
      expect(referenceBytes(`uploads/${file}`), file).toHaveLength(bytes)
      const sum = createHash('sha256').update(referenceBytes(`uploads/${file}`)).digest('hex')
      expect(readme.split('\n').find(row => row.startsWith(`| \`${file}\` |`)), `row of ${file} in data/README.md`).toContain(sum)
    }
  })

  it.each(manifest.files.filter(f => f.expect === 'accept'))('takes every set of $file without a word', ({ file, usableSets }) => {
    const reading = mustRead(read(file))
    expect(reading.sets).toHaveLength(usableSets)
    expect(reading.refusals).toEqual([])
    expect(reading.warnings).toEqual([])
    for (const { elements } of reading.sets) {
      const reference = manifest.referenceElements[elements.catalogueNumber!]
      const printedToTheSecond = file === 'omm_epoch_no_fraction.json'
      if (reference) expect(numbers(elements)).toEqual({ ...expected(reference), ...printedToTheSecond && { EPOCH: Date.UTC(2026, 10, 30, 12, 17, 46) * 1000 } })
      else expect(file).toBe('tle_alpha5.tle')
    }
  })

  it.each(Object.keys(WARNED))('takes %s with a warning that says why', (file) => {
    const reading = mustRead(read(file))
    expect(entry(file).expect).toBe('warn')
    expect(reading.sets).toHaveLength(entry(file).usableSets)
    expect(reading.refusals).toEqual([])
    expect(reading.warnings.map(w => w.code)).toContain(WARNED[file])
  })

  it.each(Object.entries(REFUSED))('names line, value and rule of what it refuses in %s', (file, [code, line, naming]) => {
    const { expect: due, usableSets } = entry(file)
    const reading = read(file)
    if (due === 'partial') {
      expect(mustRead(reading).sets).toHaveLength(usableSets)
      expect(mustRead(reading).refusals).toHaveLength(1)
    }
    else expect(['reject', 'warn']).toContain(due)
    const first = reading.kind === 'read' ? reading.refusals[0]! : reading.errors[0]!
    expect(first).toMatchObject({ code, line })
    expect(first.message).toMatch(naming)
    expect(first.message).toMatch(/Copy|Correct|Add|Ask|Remove|Upload|Convert|Write|Put|Complete|limit|can be read as|save it/)
  })

  it('takes two transposed digits, which a sum of digits cannot notice', () => {
    // The manifest calls for a refusal, but the file holds 97.4012 for 97.4021, whose digits have the same sum.
    const [set] = mustRead(read(TRANSPOSED)).sets
    expect(set!.elements.inclinationDeg).toBe(97.4012)
  })

  it('decides on every file of the manifest', () => {
    const decided = new Set([TRANSPOSED, ...Object.keys(WARNED), ...Object.keys(REFUSED)])
    expect(manifest.files.filter(f => f.expect !== 'accept' && !decided.has(f.file)).map(f => f.file)).toEqual([])
  })

  it('spells out Alpha-5 numbers as the published scheme has them', () => {
    expect(mustRead(read('tle_alpha5.tle')).sets.map(s => s.elements.catalogueNumber)).toEqual(['100001', '148493', '182931', '234018', '301928', '339999'])
  })

  it('keeps names that look like data lines, and strips only the leading zero of a name line', () => {
    expect(mustRead(read('tle_name_starts_with_1.tle')).sets.map(s => s.elements.name)).toEqual(['1 FINE DAY', '2 OF A KIND'])
    expect(mustRead(read('tle_good_0_prefix_names.tle')).sets.map(s => s.elements.name)).toEqual(['INVENTED SSO 500', 'INVENTED 51.6'])
  })

  it('counts a repeated set once and says so, under another name too', () => {
    const twice = mustRead(read('tle_duplicate_sets.tle'))
    expect(twice.repeated).toBe(1)
    const renamed = mustRead(read('tle_same_number_other_name.tle'))
    expect(renamed.repeated).toBe(1)
    expect(renamed.warnings[0]).toMatchObject({ line: 5, name: 'OTHER NAME' })
    expect(renamed.warnings[0]!.message).toContain('"INVENTED SSO 500"')
  })

  it('keeps the year 2057 of a four-digit epoch', () => {
    expect(mustRead(read('omm_epoch_2057.json')).sets[0]!.elements.epochUtcUs).toBe(Date.UTC(2057, 0, 1) * 1000)
  })

  it('gives one set the same key in every notation', () => {
    const keys = (file: string) => mustRead(read(file)).sets.map(s => s.contentKey)
    const json = keys('omm_good.json')
    expect(new Set(json).size).toBe(3)
    for (const file of ['tle_good_3le.tle', 'omm_good.kvn', 'omm_reordered_columns.csv', 'omm_crlf_quoted.csv']) expect(keys(file), file).toEqual(json.slice(0, 2))
    for (const file of ['omm_good.csv', 'omm_good_ndm.xml']) expect(keys(file), file).toEqual(json)
  })
})
