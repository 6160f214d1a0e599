import { z } from 'zod'
import { ELEMENT_NOTATIONS } from '../formats/elements/write/written'
import { verdictSchema } from './tables'
import { idSchema, instantOut, instantSchema, pageQuery, reasonSchema } from './common'

export const noteOut = z.object({ line: z.number().int(), name: z.string().optional(), code: z.string(), message: z.string() })
export type NoteOut = z.infer<typeof noteOut>

export const uploadState = z.enum(['receiving', 'reading', 'finished', 'cancelled', 'failed'])
export const uploadSource = z.enum(['file', 'paste', 'api', 'folder', 'demo'])
export const uploadBrief = z.object({
  id: idSchema,
  state: uploadState,
  format: z.string().nullable(),
  fileName: z.string().nullable(),
  by: z.string(),
  source: uploadSource,
  at: instantOut,
  finishedAt: instantOut.nullable(),
  readBytes: z.number().int(),
  totalBytes: z.number().int(),
  accepted: z.number().int(),
  alreadyHeld: z.number().int(),
  refused: z.number().int(),
  /** Why nothing was taken, where nothing was. */
  detail: z.string().nullable(),
  /** Somebody has asked for it to be given up. */
  cancelling: z.boolean(),
})
export type UploadBrief = z.infer<typeof uploadBrief>
export const uploadOut = uploadBrief.extend({
  warned: z.number().int(),
  /** The first thousand by line; the rest is paged under `notes`. */
  refusals: z.array(noteOut),
  warnings: z.array(noteOut),
  /** Sets this upload brought, and those it brought again: the first thousand by line. */
  sets: z.array(z.object({ id: idSchema, line: z.number().int(), name: z.string().nullable(), catalogueNumber: z.string().nullable(), epoch: instantOut, spacecraftId: idSchema.nullable(), spacecraftName: z.string().nullable(), state: z.string() })),
})
export type UploadOut = z.infer<typeof uploadOut>
export const uploadsQuery = pageQuery.extend({ inHand: z.enum(['true', 'false']).optional(), source: uploadSource.optional() })
export const uploadNotesQuery = pageQuery.extend({ kind: z.enum(['refusal', 'warning']).default('refusal') })

export const elementSetState = z.enum(['waiting', 'in-use', 'past', 'refused'])
/** Where a set of no spacecraft stands: to be decided on, kept on purpose, dropped. */
export const handlingSchema = z.enum(['open', 'kept', 'dropped'])
const searchSchema = z.string().trim().min(1, 'Write a part of a name, or the beginning of a number.').max(80)
export const elementSetsQuery = pageQuery.extend({
  spacecraftId: idSchema.optional(), state: elementSetState.optional(), unassigned: z.enum(['true', 'false']).optional(),
  handling: handlingSchema.optional(), uploadId: idSchema.optional(), q: searchSchema.optional(),
})
export const setCounts = z.object({ waiting: z.number().int(), open: z.number().int(), kept: z.number().int(), dropped: z.number().int() })
const setIds = z.array(idSchema).min(1).max(1000)
/** Sets of no spacecraft: named one by one, or all of an upload, of a search or of what stands at `handling`. */
export const whichUnassigned = z.strictObject({ ids: setIds.optional(), uploadId: idSchema.optional(), q: searchSchema.optional(), handling: handlingSchema.optional() })
  .refine(which => Object.values(which).some(value => value !== undefined), 'Say which: ids, uploadId, q or handling.')
export const assignSetBody = z.strictObject({ spacecraftId: idSchema })
export const assignSetsBody = assignSetBody.extend({ ids: setIds })
export const changedOut = z.object({ changed: z.number().int() })
const elementNotation = z.enum(ELEMENT_NOTATIONS, { error: `Name a notation: ${ELEMENT_NOTATIONS.join(', ')}.` })
export const downloadQuery = z.strictObject({ notation: elementNotation })
export const downloadSetsQuery = z.strictObject({
  notation: elementNotation,
  /** Parted by commas. */
  ids: z.string().max(4000).transform(text => [...new Set(text.split(','))]).pipe(z.array(idSchema).min(1).max(100)).meta({ type: 'string' }),
})
export const elementSetOut = z.object({
  id: idSchema,
  uploadId: idSchema,
  spacecraftId: idSchema.nullable(),
  spacecraftName: z.string().nullable(),
  state: elementSetState,
  name: z.string().nullable(),
  catalogueNumber: z.string().nullable(),
  designator: z.string().nullable(),
  epoch: instantOut,
  epochUtcUs: z.number(),
  ageHours: z.number(),
  perigeeKm: z.number(),
  apogeeKm: z.number(),
  inclinationDeg: z.number(),
  eccentricity: z.number(),
  meanMotionRevPerDay: z.number(),
  bstar: z.number(),
  sha256: z.string(),
  originalText: z.string(),
  warnings: z.array(noteOut),
  uploadedAt: instantOut,
  uploadedBy: z.string(),
  decidedAt: instantOut.nullable(),
  decidedBy: z.string().nullable(),
  reason: z.string().nullable(),
  /** It is put into use at this instant, as this person has asked for. */
  useAt: instantOut.nullable(),
  useScheduledBy: z.string().nullable(),
  /** Why the spacecraft's rule has not taken this waiting set into use. */
  ruleDeclined: z.string().nullable(),
})
export type ElementSetOut = z.infer<typeof elementSetOut>

export const scheduleUseBody = z.strictObject({ at: instantSchema })
export const refuseSetBody = z.strictObject({ reason: reasonSchema.optional() }).optional()

export const setWarning = z.object({ code: z.string(), message: z.string(), /** What to do about it. */ action: z.string() })
const linkShift = z.object({ linkId: idSchema, linkName: z.string(), worstShiftHz: z.number(), allowanceHz: z.number() })

const tableChange = z.object({
  tableId: idSchema, passId: idSchema, stationName: z.string(), linkName: z.string(), aos: instantOut, revision: z.number().int(),
  verdictBefore: verdictSchema,
  /** Null: no table would be made any more, and `gone` says why. */
  verdictAfter: verdictSchema.nullable(),
  gone: z.string().nullable(),
})
/**
 * What putting a set into use does to tables. Before: computed, nothing written. After: what is on record as its doing,
 * for a set that is or was in use.
 */
export const previewOut = z.object({
  setId: idSchema,
  asOf: z.enum(['before', 'after']),
  /** With the stations now. A revision is superseded where its rows' residual moves by more than `limitHz`, a fifth of the allowance, or its verdict changes. */
  published: z.array(tableChange.extend({ supersedes: z.boolean(), movesByHz: z.number().nullable(), limitHz: z.number().nullable(), reason: z.string().nullable() })),
  /** Of the next 48 h, not out yet, and with another verdict; computed anew in place. */
  drafts: z.array(tableChange.extend({ state: z.string(), returnsToDraft: z.boolean() })),
  /** How many tables were looked at, and passes that come or go. */
  looked: z.object({ published: z.number().int(), drafts: z.number().int(), passesGone: z.number().int(), passesNew: z.number().int() }),
})
/** Left out: by the set's state. A past set can be looked at both ways: what it did, and what a roll-back would do. */
export const previewQuery = z.strictObject({ asOf: z.enum(['before', 'after']).optional() })
export type PreviewOut = z.infer<typeof previewOut>

/** Shift of prediction of the coming passes against the set in use. */
export const comparisonOut = z.object({
  setId: idSchema,
  inUseSetId: idSchema.nullable(),
  warnings: z.array(setWarning),
  passes: z.array(z.object({
    stationId: idSchema, stationName: z.string(),
    aos: instantOut, aosShiftS: z.number().nullable(), culminationShiftS: z.number().nullable(), losShiftS: z.number().nullable(), maxElevationShiftDeg: z.number().nullable(),
    presence: z.enum(['both', 'new', 'gone']),
    links: z.array(linkShift),
  })),
  /** Of each link the pass that moves it most. */
  worstByLink: z.array(linkShift.extend({ share: z.number(), stationName: z.string(), aos: instantOut })),
  /** Largest move of any rise, culmination or set; largest change of Doppler as a share of an allowance. */
  largest: z.object({ shiftS: z.number(), allowanceShare: z.number() }),
  /** Along-track jump at the newer epoch over what the sets' age explains. */
  jumpSigmas: z.number().nullable(),
  /** New minus old over a day, in the frame of the set in use: up, ahead, and to the left of the track. */
  difference: z.array(z.object({ at: instantOut, radialM: z.number(), alongM: z.number(), crossM: z.number() })),
  /** Doppler of the pass and link that move most, by both sets. */
  curve: z.object({ stationName: z.string(), aos: instantOut, linkName: z.string(), allowanceHz: z.number(), samples: z.array(z.object({ at: instantOut, oldHz: z.number(), newHz: z.number() })) }).nullable(),
})
export type ComparisonOut = z.infer<typeof comparisonOut>
