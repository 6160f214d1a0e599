import type { z } from 'zod'

/** What a rule of a schema says to a person where the schema itself does not say it in words of its own. */
export function plainIssue(issue: z.core.$ZodIssue): string {
  switch (issue.code) {
    case 'invalid_type': return { number: 'Give a number.', int: 'Give a whole number.', string: 'Fill this in.' }[issue.expected as string] ?? issue.message
    case 'too_big': return issue.message.startsWith('Too big') ? `${issue.inclusive === false ? 'Less than' : 'At most'} ${issue.maximum}.` : issue.message
    case 'too_small': return issue.message.startsWith('Too small') ? `${issue.inclusive === false ? 'More than' : 'At least'} ${issue.minimum}.` : issue.message
    default: return issue.message
  }
}
