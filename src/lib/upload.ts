import { ApiProblem, type FieldProblem } from './api-client.ts'

export interface UploadRequest {
  method?: 'POST' | 'PUT'
  /** without /api */
  path: string
  /** name of the form's field */
  field: string
  file: File
  /** revision that it was decided on */
  ifMatch?: number
  /** of the session; useMe().token */
  token: string
  onProgress?: (sent: number, total: number) => void
  signal?: AbortSignal
}

const failed = (code: string, title: string, detail: string, status = 0) => new ApiProblem({ code, status, title, detail })

function problemIn(request: XMLHttpRequest): ApiProblem {
  try {
    const { type, title, detail, errors, status: _status, instance: _instance, ...extra } = JSON.parse(request.responseText) as Record<string, unknown>
    if (typeof detail === 'string') return new ApiProblem({ code: String(type).split('/').at(-1) ?? 'unexpected', status: request.status, title: String(title), detail, errors: Array.isArray(errors) ? (errors as FieldProblem[]) : [], extra })
  } catch {
    // not a problem document: told below
  }
  return failed('unexpected', 'Something failed', `The server answered ${request.status} without a reason. Nothing was kept; try again, and tell an administrator if it stays.`, request.status)
}

/**
 * Sends one file in a form and tells how much has gone. XMLHttpRequest, since fetch does not tell what was sent.
 *
 * @throws ApiProblem  `stopped` when the signal stopped it, `network` without an answer, else the server's refusal
 */
export function upload<T>({ method = 'PUT', path, field, file, ifMatch, token, onProgress, signal }: UploadRequest): Promise<T> {
  return new Promise<T>((done, fail) => {
    const request = new XMLHttpRequest()
    request.open(method, `/api${path}`)
    request.setRequestHeader('Accept', 'application/json')
    request.setRequestHeader('X-Detent-Token', token)
    request.setRequestHeader('Idempotency-Key', crypto.randomUUID())
    if (ifMatch !== undefined) request.setRequestHeader('If-Match', `"${ifMatch}"`)
    request.upload.onprogress = (event) => onProgress?.(event.loaded, event.lengthComputable ? event.total : file.size)
    request.onload = () => {
      if (request.status >= 200 && request.status < 300) done(JSON.parse(request.responseText) as T)
      else fail(problemIn(request))
    }
    request.onerror = () => fail(failed('network', 'No answer', 'Detent did not answer. Nothing is known to be kept; check the network, look whether the file arrived, and send it again.'))
    request.onabort = () => fail(failed('stopped', 'Stopped', 'The upload was stopped. Nothing was kept.'))
    signal?.addEventListener('abort', () => request.abort(), { once: true })
    const form = new FormData()
    form.append(field, file, file.name)
    request.send(form)
  })
}
