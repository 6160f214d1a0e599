import type { FormulaCard } from '#shared/formats/formula-cards'
import type { Place } from '#shared/checks/values'

export interface MethodPlace { readonly place: Place, readonly title: string, readonly text: readonly string[] }

/** What is computed, in the order of the work. */
export const methodPlaces: readonly MethodPlace[] = [
  { place: 'range-rate', title: 'Range rate', text: [
    'Elements in use go through SGP4, which gives position and velocity in TEME, axes that do not turn. An error of SGP4 ends the set there, by name; near decay errors come and go, so nothing after the first one is used.',
    'TEME is turned to the Earth about its axis by sidereal time at UT1. UT1−UTC is a dated setting; where none is valid it is taken as 0, and the budget bears 0.9 s for it. The station stands on the ellipsoid of WGS-84, at its antenna’s phase centre. Range rate is positive when the spacecraft recedes. Elevation is geometric, azimuth from true north.',
  ] },
  { place: 'doppler', title: 'Doppler', text: [
    'One way, in axes that do not turn, with the light time iterated and both ends’ time dilation. On a downlink the radio is tuned to what arrives: above the carrier while the spacecraft approaches, falling through the pass. On an uplink it transmits so that the spacecraft hears the carrier: below it while approaching, rising through the pass. The two are not mirror images: at 8.2 GHz they differ by up to 5 Hz.',
    'The same ratio scales the symbol clock. First order, −f·ρ̇/c, serves as a check only.',
  ] },
  { place: 'link', title: 'What a link bears', text: [
    'A residual Δf costs a loss at the detector’s output that depends on ε = Δf·T, T the symbol’s length. The allowance is the Δf at which the loss reaches what the link permits, or the loop’s capture range, or what the receiver’s filter leaves beside the signal, or a limit stated for the modem (for a chirp a quarter of its bandwidth): whichever is smallest. The pass says which.',
  ] },
  { place: 'budget', title: 'Error budget', text: [
    'At each instant: the steps of the table, known exactly; timing and UT1 as limits, which add; orbit and oscillators as one-sigma spreads, which add as the root of squares, times k. Timing counts the station’s clock and the uncertainty of the command’s latency; a known latency is no error, rows are sent earlier by it. The budgeted residual is |steps| + timing + UT1 + k·spread, and it is what verdicts, margins and alerts mean.',
    'How far the spacecraft may be early or late comes from the age of its elements: a floor and a growth along the track.',
  ] },
  { place: 'plan', title: 'Tuning plan and verdict', text: [
    'The fewest retunes that keep the budgeted residual within four fifths of the allowance over the workable parts, both settings at every retune; within all of it only where four fifths have no plan. Settings lie on the radio’s grid and in the licensed band, one dwell apart.',
    'The verdict comes from a checker that shares nothing with the planner but SGP4: it takes the rows as published, applies them as the radio would, and looks at both sides of every retune, at every extreme between, and every second, on an interpolation of its own. Margin is allowance over worst budgeted residual: holds from 1.25, tight from 1, breaks below.',
  ] },
  { place: 'passes', title: 'Passes and tables', text: [
    'Each spacecraft is propagated once on a grid that all stations share; between its points position and velocity are interpolated, each by itself. Highest points are bracketed and refined, so that a pass which peaks a hundredth of a degree above the minimum is found; both crossings are refined on SGP4 itself. Where a mask splits a pass, it has several workable parts.',
  ] },
]

const folders: Record<string, Place> = { orbit: 'range-rate', doppler: 'doppler', link: 'link', accuracy: 'budget', plan: 'plan', predict: 'passes' }
/** Where a card belongs elsewhere than its folder says. */
const files: Record<string, Place> = {
  'plan/budget.ts': 'budget', 'orbit/along-track.ts': 'budget', 'orbit/passes.ts': 'passes', 'orbit/mask.ts': 'passes', 'orbit/workable.ts': 'passes',
}

export const placeOf = (card: Pick<FormulaCard, 'file'>): Place => files[card.file] ?? folders[card.file.split('/')[0]!] ?? 'passes'

/** What people look for first leads its place; the rest follows by file. */
const leads = ['createPropagator', 'lookAt', 'createNeededFrequency', 'dopplerHz', 'receivedOverTransmitted', 'allowanceOf', 'lossDb', 'budgetAt', 'uncertaintyHz', 'planRetunes', 'checkTable', 'findPasses', 'buildTable']
const rank = (card: FormulaCard) => (leads.indexOf(card.name) + leads.length + 1) % (leads.length + 1)

export function cardsByPlace(cards: readonly FormulaCard[]): Map<Place, FormulaCard[]> {
  const sorted = [...cards].sort((a, b) => rank(a) - rank(b))
  return new Map(methodPlaces.map(({ place }) => [place, sorted.filter(card => placeOf(card) === place)]))
}

export interface LeftOut { readonly what: string, readonly size: string, readonly source: string }

/** What is not computed, and how large it is. */
export const leftOut: readonly LeftOut[] = [
  { what: 'Polar motion', size: 'moves a station by at most 15 m, as 2 ms of timing would: overhead at 500 km 0.3 Hz at 437 MHz and 6 Hz at 8200 MHz, a tenth of that at 0°', source: 'IERS bulletins; mechanics' },
  { what: 'Refraction', size: 'brings AOS at 0° forward by about 8 s and puts LOS back by as much; at 10° by about 1 s', source: 'common practice' },
  { what: 'Gravity', size: '+0.5e-10 of the carrier in low orbit (0.02 Hz at 437 MHz, 0.4 Hz at 8200 MHz), up to 7e-10 higher up; reversed on the uplink', source: 'general relativity, first order' },
  { what: 'Ionosphere', size: 'about 0.9, 0.3 and 0.06 Hz at 145, 437 and 2200 MHz', source: 'common practice' },
  { what: 'Troposphere', size: 'about 5e-10 of the carrier at 10° (0.2 Hz at 437 MHz, 4 Hz at 8200 MHz), three times that at 5°, nothing at culmination', source: 'estimate: 2.4 m over sin E, 500 km' },
]
