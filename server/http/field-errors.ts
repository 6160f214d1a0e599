import type { z } from 'zod'
import type { FieldError } from '~~/server/domain/errors'

/**
 * What a schema's issues say, at the fields where they can be mended. Of alternatives (an id, or the thing itself) the
 * one that was meant answers: the only one that knows all the fields that were given.
 */
export function fieldErrors(issues: readonly z.core.$ZodIssue[]): FieldError[] {
  return issues.flatMap((issue) => {
    const meant = issue.code === 'invalid_union' ? issue.errors.filter(isMeant) : []
    if (meant.length === 1) return fieldErrors(meant[0]!.map(inner => ({ ...inner, path: [...issue.path, ...inner.path] })))
    return [{ path: issue.path.map(String).join('.'), message: issue.message }]
  })
}

const isMeant = (issues: readonly z.core.$ZodIssue[]) => issues.every(issue => issue.code !== 'unrecognized_keys' && issue.path.length > 0)
