import type { Allowed } from '../../../shared/contract/people.ts'

/** The reason for Button's `unavailable`; null when the act is allowed. */
export const refusal = (answer: Allowed): string | null => (answer.allowed ? null : answer.why)
