/** Every refusal the program knows, and its HTTP status. The code is the last part of the problem's type and never changes. */
const statusOf = {
  'invalid-request': 400,
  'malformed-json': 400,
  'body-too-large': 413,
  'wrong-media-type': 415,
  'not-signed-in': 401,
  'wrong-credentials': 401,
  'wrong-password': 403,
  'wrong-code': 403,
  'code-asked': 403,
  'second-factor-missing': 403,
  'not-permitted': 403,
  'cross-site': 403,
  'own-work': 403,
  'signing-right-unconfirmed': 403,
  'not-found': 404,
  'wrong-state': 409,
  'already-exists': 409,
  'value-conflict': 409,
  'in-use': 409,
  'base-outdated': 409,
  'content-differs': 409,
  'key-reused': 409,
  'link-used': 410,
  'link-expired': 410,
  'precondition-failed': 412,
  'content-invalid': 422,
  'check-blocks': 422,
  'check-stale': 422,
  'version-refused': 422,
  'weak-password': 422,
  'last-administrator': 422,
  'precondition-required': 428,
  'too-many-requests': 429,
  'verification-failed': 500,
  'storage-failed': 500,
  'storage-full': 507,
  unexpected: 500,
} as const

export type ErrorCode = keyof typeof statusOf

export interface FieldProblem {
  /** RFC 6901 pointer into the request's body, or into the content named in the problem */
  pointer: string
  detail: string
}

/**
 * A refusal: what happened, what was kept, and what to do, in one or two sentences a person can act on.
 *
 * `recorded` refusals (misuse: somebody tried what they may not) become ledger entries after the rollback.
 */
export class DomainError extends Error {
  readonly code: ErrorCode
  readonly fields: FieldProblem[]
  readonly extra: Record<string, unknown>
  readonly recorded: boolean

  constructor(code: ErrorCode, message: string, details: { fields?: FieldProblem[]; extra?: Record<string, unknown>; recorded?: boolean } = {}) {
    super(message)
    this.name = 'DomainError'
    this.code = code
    this.fields = details.fields ?? []
    this.extra = details.extra ?? {}
    this.recorded = details.recorded ?? false
  }

  get status(): number {
    return statusOf[this.code]
  }
}

/** RFC 9457 title: the kind of problem, the same at each occurrence. */
const titleOf: Record<ErrorCode, string> = {
  'invalid-request': 'The request does not fit',
  'malformed-json': 'The body is not JSON',
  'body-too-large': 'The body is too large',
  'wrong-media-type': 'The body has another type than expected',
  'not-signed-in': 'Not signed in',
  'wrong-credentials': 'The sign-in was refused',
  'wrong-password': 'The password is wrong',
  'wrong-code': 'The code is wrong',
  'code-asked': 'A code of your second factor is asked for',
  'second-factor-missing': 'The second factor is not set up yet',
  'not-permitted': 'Not permitted',
  'cross-site': 'The request came from another site',
  'own-work': 'Nobody signs their own work',
  'signing-right-unconfirmed': 'The signing right is not confirmed yet',
  'not-found': 'Not found',
  'wrong-state': 'Not possible in this state',
  'already-exists': 'It exists already',
  'value-conflict': 'Another value was saved meanwhile',
  'in-use': 'It is in use',
  'base-outdated': 'Another release came meanwhile',
  'content-differs': 'The content differs from what was signed',
  'key-reused': 'The idempotency key was used for another request',
  'link-used': 'The link was used already',
  'link-expired': 'The link has expired',
  'precondition-failed': 'It was altered meanwhile',
  'content-invalid': 'The values do not fit the schema',
  'check-blocks': 'The check blocks it',
  'check-stale': 'The check is stale',
  'version-refused': 'The version is refused',
  'weak-password': 'The password is too weak',
  'last-administrator': 'The last administrator stays',
  'precondition-required': 'The request must say which version it is for',
  'too-many-requests': 'Too many requests',
  'verification-failed': 'The verification failed',
  'storage-failed': 'The disk failed',
  'storage-full': 'The disk is full',
  unexpected: 'Something failed inside Detent',
}

export const errorCodes = Object.keys(statusOf) as ErrorCode[]
export const statusOfCode = (code: ErrorCode): number => statusOf[code]
export const titleOfCode = (code: ErrorCode): string => titleOf[code]

export interface Problem {
  type: string
  title: string
  status: number
  detail: string
  instance?: string
  errors: FieldProblem[]
  [extra: string]: unknown
}

export const toProblem = (error: DomainError, requestId: string): Problem => ({
  ...error.extra,
  type: `/problems/${error.code}`,
  title: titleOf[error.code],
  status: error.status,
  detail: error.message,
  instance: requestId,
  errors: error.fields,
})
