import type { z } from 'zod'
import { allowanceOf } from '#shared/physics/link/allowance'
import { bitErrorRateAtOffset } from '#shared/physics/link/error-rate'
import { lossDb as lossAt } from '#shared/physics/link/loss'
import type { Allowance } from '#shared/physics/types'
import type { benchAllowanceBody, benchLossBody, benchLossOut } from '#shared/schemas/bench'
import { linkModelFrom } from './link-model-from'

/** What a link bears, and what limits it. */
export const judgeAllowance = (link: z.output<typeof benchAllowanceBody>): Allowance => allowanceOf(linkModelFrom(link))

/** What an offset costs: ε = Δf·T, the loss and the error rate that is left, where the detector has a curve and its modulation is known. */
export function judgeLoss({ offsetHz, ...given }: z.output<typeof benchLossBody>): z.infer<typeof benchLossOut> {
  const link = linkModelFrom(given)
  const epsilon = offsetHz / link.symbolRateHz
  const bitErrorRate = bitErrorRateAtOffset(link, offsetHz)
  return { epsilon, lossDb: lossAt(link, offsetHz), ...(bitErrorRate === null ? {} : { bitErrorRate }) }
}
