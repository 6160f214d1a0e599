import type { ElementFormat } from './reading'

const ENDINGS: Readonly<Record<string, ElementFormat>> = { tle: 'tle', kvn: 'omm-kvn', xml: 'omm-xml', json: 'omm-json', csv: 'omm-csv' }

/** A notation in words. */
export const NOTATION_NAMES: Readonly<Record<ElementFormat, string>> = {
  'tle': 'TLE',
  'omm-kvn': 'OMM in KVN',
  'omm-xml': 'OMM in XML',
  'omm-json': 'OMM in JSON',
  'omm-csv': 'OMM in CSV',
}

/** A warning where a file's ending says another notation than its content is in; the content decides. */
export function checkFileName(fileName: string, format: ElementFormat): string | null {
  const ending = /\.([a-z]{1,5})$/i.exec(fileName)?.[1]?.toLowerCase() ?? ''
  const said = Object.hasOwn(ENDINGS, ending) ? ENDINGS[ending]! : format
  return said === format ? null : `The file's name ends in .${ending}, but it holds ${NOTATION_NAMES[format]}; it is read by its content. Check that it is the file that was meant.`
}
