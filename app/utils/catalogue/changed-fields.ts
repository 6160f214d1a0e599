/** What of a form differs from what stands, for a PATCH that sends nothing else. Fields of the form alone decide. */
export function changedFields<T extends object>(before: T, values: Partial<T>): Partial<T> {
  const entries = Object.entries(values) as [keyof T, T[keyof T]][]
  return Object.fromEntries(entries.filter(([field, value]) => JSON.stringify(value ?? null) !== JSON.stringify(before[field] ?? null))) as Partial<T>
}

/** A required number that nobody has typed yet; the schema asks for it. */
export const notTyped = null as unknown as number
