/** One member of a problem's `errors`: a place (RFC 6901 pointer into what was sent) and what is wrong there. */
export interface FieldProblem {
  pointer: string
  detail: string
}

/**
 * A refusal of the server, read from its RFC 9457 problem document, or the network's failure in the same form.
 *
 * `code` is the last part of the problem's type; `network` when no answer came. `extra` holds members of this kind of problem
 * alone, such as `conflicts` of a value-conflict.
 */
export class ApiProblem extends Error {
  readonly code: string
  readonly status: number
  readonly title: string
  readonly detail: string
  readonly errors: readonly FieldProblem[]
  readonly extra: Readonly<Record<string, unknown>>

  constructor({ code, status, title, detail, errors = [], extra = {} }: { code: string; status: number; title: string; detail: string; errors?: readonly FieldProblem[]; extra?: Record<string, unknown> }) {
    super(detail)
    this.name = 'ApiProblem'
    this.code = code
    this.status = status
    this.title = title
    this.detail = detail
    this.errors = errors
    this.extra = extra
  }
}

/** What is wrong with one field of the body sent, such as "/title"; null when nothing is. */
export const fieldError = (problem: unknown, pointer: string): string | null =>
  problem instanceof ApiProblem ? problem.errors.filter((e) => e.pointer === pointer).map((e) => e.detail).join(' ') || null : null

let token = ''
const signedOutListeners = new Set<() => void>()
const codeAskedListeners = new Set<() => void>()
/** Keys of acts whose outcome is unknown (no answer came, or the server failed), by what was asked: the same act again is the same intent. */
const openKeys = new Map<string, string>()

/** The token of the session, to be sent with every act; read with `/me`. */
export const setActToken = (value: string) => void (token = value)

/** Told when the server no longer knows the session. Returns the way to stop listening. */
export function onSignedOut(listener: () => void): () => void {
  signedOutListeners.add(listener)
  return () => void signedOutListeners.delete(listener)
}

/** Told when the server asks for a code of the second factor before an act. Returns the way to stop listening. */
export function onCodeAsked(listener: () => void): () => void {
  codeAskedListeners.add(listener)
  return () => void codeAskedListeners.delete(listener)
}

const isRecord = (v: unknown): v is Record<string, unknown> => typeof v === 'object' && v !== null && !Array.isArray(v)

/** What a refused request was answered. */
export async function problemOf(response: Response): Promise<ApiProblem> {
  const body: unknown = await response.json().catch(() => null)
  if (!isRecord(body) || typeof body.detail !== 'string')
    return new ApiProblem({ code: 'unexpected', status: response.status, title: 'Something failed', detail: `The server answered ${response.status} without a reason. What you typed is still here; try again, and tell an administrator if it stays.` })
  const { type, title, status: _status, detail, errors, instance: _instance, ...extra } = body
  return new ApiProblem({
    code: String(type).split('/').at(-1) ?? 'unexpected',
    status: response.status,
    title: String(title),
    detail: String(detail),
    errors: Array.isArray(errors) ? (errors as FieldProblem[]) : [],
    extra,
  })
}

async function answerOf(path: string, init: RequestInit): Promise<Response> {
  let response: Response
  try {
    response = await fetch(`/api${path}`, { credentials: 'same-origin', ...init })
  } catch (error) {
    if (error instanceof DOMException && error.name === 'AbortError') throw error
    throw new ApiProblem({ code: 'network', status: 0, title: 'No answer', detail: 'Detent did not answer. What you typed is still here; check the network and try again. The same act is not done twice.' })
  }
  if (response.ok) return response
  const problem = await problemOf(response)
  if (problem.code === 'not-signed-in') for (const listener of signedOutListeners) listener()
  if (problem.code === 'code-asked') for (const listener of codeAskedListeners) listener()
  throw problem
}

async function bodyOf<T>(response: Response): Promise<T> {
  const text = await response.text()
  return (text === '' ? undefined : JSON.parse(text)) as T
}

/** Reads something. @throws ApiProblem */
export async function get<T>(path: string, { signal }: { signal?: AbortSignal } = {}): Promise<T> {
  return bodyOf<T>(await answerOf(path, { signal, headers: { Accept: 'application/json' } }))
}

export interface Act {
  method?: 'POST' | 'PATCH' | 'PUT' | 'DELETE'
  path: string
  /** JSON, or a form with files */
  body?: unknown
  /** revision that the act was decided on */
  ifMatch?: number
  /** ends the asking; only for what alters nothing */
  signal?: AbortSignal
}

/**
 * Does something, once: an act sent again after its answer was lost carries the same key, and the server answers it from its receipt.
 *
 * @throws ApiProblem
 */
export async function act<T>({ method = 'POST', path, body, ifMatch, signal }: Act): Promise<T> {
  const isForm = body instanceof FormData
  const json = isForm ? '' : JSON.stringify(body ?? {})
  const intent = isForm ? '' : `${method} ${path} ${ifMatch ?? ''} ${json}`
  const key = openKeys.get(intent) ?? crypto.randomUUID()
  if (intent) openKeys.set(intent, key)
  try {
    const answer = await bodyOf<T>(
      await answerOf(path, {
        method,
        ...(signal ? { signal } : {}),
        headers: {
          Accept: 'application/json',
          'Idempotency-Key': key,
          ...(token ? { 'X-Detent-Token': token } : {}),
          ...(isForm ? {} : { 'Content-Type': 'application/json' }),
          ...(ifMatch === undefined ? {} : { 'If-Match': `"${ifMatch}"` }),
        },
        body: isForm ? body : json,
      }),
    )
    openKeys.delete(intent)
    return answer
  } catch (error) {
    if (signal?.aborted || (error instanceof ApiProblem && error.status >= 400 && error.status < 500)) openKeys.delete(intent)
    throw error
  }
}

/** Path and query of an API address, each value made safe; undefined and empty ones are left out. */
export function withQuery(path: string, query: Record<string, string | number | null | undefined>): string {
  const entries = Object.entries(query).filter((e): e is [string, string | number] => e[1] !== undefined && e[1] !== null && e[1] !== '')
  return entries.length === 0 ? path : `${path}?${new URLSearchParams(entries.map(([k, v]) => [k, String(v)])).toString()}`
}
