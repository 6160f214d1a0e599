import { describe, expect, it } from 'vitest'
import { smallFigure, toleranceFigure } from '../../../../app/utils/methods/figures'
import { cardsByPlace, methodPlaces, placeOf } from '../../../../app/utils/methods/places'
import { places } from '../../../../shared/checks/values'
import { readCards } from '../../../../shared/formats/formula-cards'
import { sourceFiles } from '../../../support/source-files'

const cards = sourceFiles('shared/physics').flatMap(({ path, text }) => readCards(path.slice('shared/physics/'.length), text))

describe('small figures on the page of methods', () => {
  it.each([[0, '0'], [0.0123, '0.012'], [-0.4, '−0.4'], [5e-4, '5e−4'], [-2.13e-7, '−2.1e−7'], [584.172, '584'], [-1234, '−1\u202F234']])('%d is %s', (value, shown) => {
    expect(smallFigure(value)).toBe(shown)
  })

  it('say exact where nothing is allowed', () => {
    expect([0, 0.002].map(toleranceFigure)).toEqual(['exact', '± 0.002'])
  })
})

describe('the page of methods', () => {
  it('has a place for every check, in the order of the work', () => {
    expect(methodPlaces.map(({ place }) => place)).toEqual([...places])
  })

  it('shows every card once', () => {
    const shown = [...cardsByPlace(cards).values()].flat().map(card => card.name)
    expect(shown.sort()).toEqual(cards.map(card => card.name).sort())
  })

  it('puts the budget with the answers that it needs, and passes with horizon and mask', () => {
    expect(['plan/budget.ts', 'orbit/along-track.ts', 'orbit/mask.ts', 'link/loss.ts'].map(file => placeOf({ file }))).toEqual(['budget', 'budget', 'passes', 'link'])
  })

  it('leads each place with what people look for first', () => {
    const leads = [...cardsByPlace(cards)].map(([place, [first]]) => [place, first?.name])
    expect(Object.fromEntries(leads)).toMatchObject({ 'range-rate': 'createPropagator', 'doppler': 'createNeededFrequency', 'link': 'allowanceOf', 'budget': 'budgetAt', 'plan': 'planRetunes', 'passes': 'findPasses' })
  })
})
