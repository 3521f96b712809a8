import { ipKeyGenerator, rateLimit, type RateLimitRequestHandler } from 'express-rate-limit'
import type { Request } from 'express'
import { DomainError } from '../../http/errors.ts'
import { normalEmail } from './check-credentials.ts'

const minute = 60_000
const addressOf = (req: Request) => ipKeyGenerator(req.ip ?? '')
const accountOf = (req: Request) => {
  const { email } = (req.body ?? {}) as { email?: unknown }
  return typeof email === 'string' ? normalEmail(email).slice(0, 254) : ''
}

const throttle = (limit: number, windowMs: number, by: (req: Request) => string, { failuresOnly }: { failuresOnly: boolean }): RateLimitRequestHandler =>
  rateLimit({
    windowMs,
    limit,
    keyGenerator: by,
    skipSuccessfulRequests: failuresOnly,
    standardHeaders: 'draft-8',
    legacyHeaders: false,
    validate: { xForwardedForHeader: false },
    handler: (_req, _res, next) => next(new DomainError('too-many-requests', 'There were too many attempts from here. Nothing was done; wait a quarter of an hour, then try again.')),
  })

/**
 * Limits of what people reach without a session.
 *
 * By account and address together, so that a stranger elsewhere locks nobody out; by address alone much wider, against one who walks
 * through accounts. Sign-ins that succeed do not count.
 */
export const throttles = () => ({
  signIn: [
    throttle(10, 15 * minute, (req) => `${accountOf(req)} ${addressOf(req)}`, { failuresOnly: true }),
    throttle(100, 15 * minute, addressOf, { failuresOnly: true }),
  ],
  askReset: [
    throttle(5, 15 * minute, (req) => `${accountOf(req)} ${addressOf(req)}`, { failuresOnly: false }),
    throttle(50, 15 * minute, addressOf, { failuresOnly: false }),
  ],
  /** of one person wherever they come from: the password was right before, so that no stranger gets here */
  code: [throttle(10, 15 * minute, (req) => (req.session.pending ? `person ${req.session.pending.person}` : addressOf(req)), { failuresOnly: true })],
  links: [throttle(100, 15 * minute, addressOf, { failuresOnly: true })],
})
