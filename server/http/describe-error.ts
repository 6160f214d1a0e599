/**
 * An error as the log may hold it. The query builder's errors carry the values of their statement, among them the hashes
 * of passwords and the text of mails: of these only the statement is told, and what the database said.
 */
export function describeError(error: unknown): object {
  if (!(error instanceof Error)) return { message: String(error).slice(0, 500) }
  const message = error.message.split('\nparams:', 1)[0]!.slice(0, 1000)
  const { code } = error as { code?: unknown }
  const frames = error.stack?.split('\n').filter(line => /^\s+at /.test(line)).join('\n')
  return { name: error.name, message, ...(typeof code === 'string' ? { code } : {}), stack: frames, ...(error.cause instanceof Error ? { cause: describeError(error.cause) } : {}) }
}
