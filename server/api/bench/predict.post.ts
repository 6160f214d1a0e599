import { predictBench } from '~~/server/domain/bench/predict-bench'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/bench/predict', ({ db, now, actor, body }) => predictBench({ db, now, actor }, body))
