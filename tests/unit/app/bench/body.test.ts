import { describe, expect, it } from 'vitest'
import { benchPredictBody } from '#shared/schemas/bench'
import { bodyOf, instantAsTyped, problemsOf } from '~/utils/bench/body'
import { exampleQuestion } from '~/utils/bench/example'
import { blankQuestion } from '~/utils/bench/question'
import type { BenchQuestion } from '~/utils/bench/question'

const now = Date.parse('2026-11-30T18:00:41.000Z')
const ask = (change: (question: BenchQuestion) => void) => {
  const question = exampleQuestion(now)
  change(question)
  return question
}

describe('what the form sends', () => {
  it('is a body that the interface takes, with the figures given', () => {
    expect(benchPredictBody.parse(bodyOf(exampleQuestion(now)))).toMatchObject({
      from: '2026-11-30T18:00:00.000Z', to: '2026-12-01T18:00:00.000Z', sampleIntervalS: 10,
      station: { latitudeDeg: 60, minElevationDeg: 5 }, link: { carrierHz: 437_500_000, detector: 'quadrature' }, radio: { stepHz: 10, latencyMs: 50 }, budget: { clockErrorMs: 10, k: 2 },
    })
  })

  it('names what is held by its id alone', () => {
    const id = '00000000-0000-4000-8000-000000000001'
    const body = bodyOf(ask((question) => {
      for (const part of [question.elements, question.station, question.link, question.radio]) Object.assign(part, { source: 'held', id })
    }))
    expect([body.elements, body.station, body.link, body.radio]).toEqual([{ elementSetId: id }, { stationId: id }, { linkId: id }, { radioId: id }])
  })

  it('takes an instant under "UTC" as people type it', () => {
    // ISO 8601; what bears a zone keeps it.
    expect(['2026-12-01 03:12', '2026-12-01T03:12:45', '2026-12-01 03:12 UTC', '2026-12-01T03:12+01:00', ' 2026-12-01T03:12Z ', 'soon'].map(instantAsTyped))
      .toEqual(['2026-12-01T03:12Z', '2026-12-01T03:12:45Z', '2026-12-01T03:12Z', '2026-12-01T03:12+01:00', '2026-12-01T03:12Z', 'soon'])
  })
})

describe('what the form does not send', () => {
  it('asks for elements and a station first', () => {
    expect(Object.keys(problemsOf(blankQuestion(now)))).toEqual(['elements.elementSetId', 'station.stationId'])
  })

  it('says each wrong figure at its own field', () => {
    expect(Object.keys(problemsOf(ask((question) => {
      question.elements.text = ' '
      question.station.latitudeDeg = 91
      question.station.mask = [{ azimuthDeg: 400, elevationDeg: 0 }]
      question.window.from = 'tomorrow'
      question.window.sampleIntervalS = 0.0005
      question.link.detector = 'stated'
      question.radio.stepHz = null as unknown as number
      question.budget.k = -1
    }))).sort()).toEqual(['budget.k', 'elements.text', 'from', 'link.limitHz', 'radio.stepHz', 'sampleIntervalS', 'station.latitudeDeg', 'station.mask.0.azimuthDeg'])
  })

  it('leaves alone what is given but not used', () => {
    expect(problemsOf(ask((question) => {
      Object.assign(question.station, { source: 'held', id: '00000000-0000-4000-8000-000000000001', latitudeDeg: 500 })
    }))).toEqual({})
  })
})
