import type { RouteAnswer, RouteBodyIn, RouteName, RouteParams } from '#shared/routes'

export interface FieldProblem { path: string, message: string, line?: number }

/** What the server said when it did not do it; `fields` name what to mend. */
export class ApiProblem extends Error {
  /** As the server wrote it; what a page rendered there hands over to the browser is read from this. */
  readonly data: { title: string, detail: string, errors: FieldProblem[] }
  constructor(readonly status: number, readonly title: string, readonly detail: string, readonly fields: FieldProblem[] = [], readonly retryAfterS: number | null = null) {
    super(detail)
    this.name = 'ApiProblem'
    this.data = { title, detail, errors: fields }
  }
}

export interface CallOptions<R extends RouteName> {
  params?: RouteParams<R>
  query?: Record<string, string | number | undefined>
  body?: RouteBodyIn<R> | FormData
  headers?: Record<string, string>
}

export type Fetcher = (url: string, options: Record<string, unknown>) => Promise<unknown>

/** The address of a route with its parameters filled in. */
export function pathOf(route: RouteName, params: unknown): string {
  return route.slice(route.indexOf(' ') + 1).replace(/\{(\w+)\}/g, (_, name: string) => encodeURIComponent(String((params as Record<string, unknown>)[name])))
}

/** Calls a route of the interface, typed by the route table; every failure comes out as an ApiProblem. */
export async function callApi<R extends RouteName>(route: R, options: CallOptions<R> = {}, fetcher: Fetcher = $fetch as Fetcher): Promise<RouteAnswer<R>> {
  const method = route.slice(0, route.indexOf(' '))
  try {
    return await fetcher(pathOf(route, options.params), { method, query: options.query, body: options.body, headers: options.headers, retry: 0 }) as RouteAnswer<R>
  }
  catch (error) {
    throw asProblem(error)
  }
}

export function asProblem(error: unknown): ApiProblem {
  if (error instanceof ApiProblem) return error
  const { data, statusCode, status = statusCode, response } = error as { data?: { title?: string, detail?: string, errors?: FieldProblem[] }, status?: number, statusCode?: number, response?: { headers: Headers } }
  if (status && data?.detail) return new ApiProblem(status, data.title ?? '', data.detail, data.errors ?? [], Number(response?.headers.get('retry-after')) || null)
  return new ApiProblem(status ?? 0, 'No answer', status ? `The server answered ${status}.` : 'The server did not answer: check the connection and try again. Nothing you typed is lost.')
}
