/** What went wrong in a numerical routine; the code decides how the caller words it. */
export type NumericErrorCode =
  | 'not-finite'
  | 'out-of-range'
  | 'bounds-crossed'
  | 'unknown-parameter'
  | 'rates-refused'
  | 'too-large'
  | 'no-convergence'
  | 'singular'
  | 'bad-input'

export interface NumericErrorDetails {
  /** The field or matrix entry at fault. */
  readonly field?: string
  readonly value?: unknown
  readonly limit?: number
  /** Remaining error of an iteration that stopped at its bound. */
  readonly residual?: number
  /** Admissible value nearest to the refused one. */
  readonly proposal?: number
  /** What happened, what was kept, what to do. */
  readonly text: string
}

/** The one error of the control core: a code for the program, a sentence for the person. */
export class NumericError extends Error {
  readonly code: NumericErrorCode
  readonly details: NumericErrorDetails

  constructor(code: NumericErrorCode, details: NumericErrorDetails) {
    super(details.text)
    this.name = 'NumericError'
    this.code = code
    this.details = details
  }
}
