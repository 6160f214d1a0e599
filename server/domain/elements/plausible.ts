import type { ComparisonOut } from '#shared/schemas/elements'
import type { AutoUseRule } from '#shared/schemas/spacecraft'
import { formatHz } from '#shared/utils/format'

/** Why a rule leaves a set to people; nothing where it is plausible by all of its limits. */
export function whyNotPlausible(rule: AutoUseRule, comparison: Pick<ComparisonOut, 'warnings' | 'passes' | 'worstByLink' | 'largest' | 'jumpSigmas' | 'inUseSetId'>): string[] {
  const { warnings, passes, worstByLink, largest, jumpSigmas, inUseSetId } = comparison
  if (inUseSetId === null) return ['No set is in use to compare with: a person puts the first one into use.']
  const why = warnings.map(warning => warning.message)
  const changed = passes.filter(pass => pass.presence !== 'both').length
  if (changed > 0) why.push(`${changed} of the coming passes come or go with it.`)
  if (largest.shiftS > rule.maxShiftS) why.push(`A coming pass moves by ${largest.shiftS.toFixed(2)} s; the rule allows ${rule.maxShiftS} s.`)
  const [worst] = worstByLink
  if (worst && worst.share > rule.maxAllowanceShare) why.push(`Doppler of ${worst.linkName} changes by ${formatHz(worst.worstShiftHz, 1)} Hz, ${(worst.share * 100).toFixed(0)} % of its allowance; the rule allows ${(rule.maxAllowanceShare * 100).toFixed(0)} %.`)
  if (jumpSigmas === null) why.push('How far it is from the set in use cannot be told: one of them has ended by the newer epoch.')
  else if (jumpSigmas > rule.maxSigmas) why.push(`Along the track it is ${jumpSigmas.toFixed(1)} σ from the set in use; the rule allows ${rule.maxSigmas} σ.`)
  return why
}
