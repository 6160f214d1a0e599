import type { Warn } from '../reading'
import { quote } from '../show-value'
import type { OmmFields } from './fields'

/** Without these nothing says how the numbers are meant, and a guess may be hundreds of kilometres off. */
const DECIDING = ['CENTER_NAME', 'REF_FRAME', 'TIME_SYSTEM', 'MEAN_ELEMENT_THEORY']
/** Mandatory too, but no prediction hangs on them. */
const FORMAL = ['CCSDS_OMM_VERS', 'CREATION_DATE', 'ORIGINATOR', 'OBJECT_ID']

/**
 * Holds a whole message (KVN, XML) against what the standard makes mandatory beside the elements. Flat exports in JSON and
 * CSV leave it out and mean EARTH, TEME, UTC and SGP4.
 * @throws SetRefusal `missing`
 */
export function checkHeader(fields: OmmFields, warn: Warn): void {
  for (const key of DECIDING) fields.requiredText(key, 'Without it nothing says how the numbers are meant:')
  const missing = FORMAL.filter(key => fields.text(key) === null)
  if (missing.length > 0) {
    warn(fields.lineOf(missing[0]!), 'header', `${missing.join(', ')} ${missing.length === 1 ? 'is' : 'are'} missing, which the standard demands of every message. No prediction hangs on that; nothing needs to be done.`)
  }
  const unknown = fields.unknown()
  if (unknown.length > 0) {
    const shown = unknown.slice(0, 3).map(entry => quote(entry.key)).join(', ')
    warn(unknown[0]!.line, 'unknown-keyword', `${shown}${unknown.length > 3 ? ` and ${unknown.length - 3} more` : ''} ${unknown.length === 1 ? 'is no keyword' : 'are no keywords'} of an OMM and ${unknown.length === 1 ? 'was' : 'were'} left out. Check the spelling if ${unknown.length === 1 ? 'it matters' : 'they matter'}.`)
  }
}
