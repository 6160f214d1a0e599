import type { z } from 'zod'
import type { ApiProblem } from '~/utils/api'

/**
 * A form over one schema, the same that the route validates with. Errors stand at their fields, from the schema
 * before sending and from the server after; what was typed stays.
 */
export function useForm<S extends z.ZodType, T>(schema: S, initial: () => z.input<S> & object, send: (values: z.input<S>) => Promise<T>) {
  const values = reactive(initial()) as Record<string, unknown>
  const errors = ref<Record<string, string>>({})
  const problem = shallowRef<ApiProblem | null>(null)
  const busy = ref(false)

  function validate(): boolean {
    const result = schema.safeParse(toRaw(values))
    errors.value = {}
    if (!result.success) for (const issue of result.error.issues) errors.value[issue.path.map(String).join('.')] ??= plainIssue(issue)
    return result.success
  }

  async function submit(): Promise<T | undefined> {
    problem.value = null
    if (!validate() || busy.value) {
      await focusFirstError()
      return undefined
    }
    busy.value = true
    try {
      return await send(toRaw(values) as z.input<S>)
    }
    catch (error) {
      problem.value = asProblem(error)
      for (const field of problem.value.fields) errors.value[field.path] ??= field.message
      await focusFirstError()
      return undefined
    }
    finally {
      busy.value = false
    }
  }

  function reset() {
    Object.assign(values, initial())
    errors.value = {}
    problem.value = null
  }
  return { values, errors, problem, busy, submit, reset, validate }
}

async function focusFirstError() {
  await nextTick()
  document.querySelector<HTMLElement>('[aria-invalid="true"]')?.focus()
}
