import { timingSafeEqual } from 'node:crypto'
import type { RequestHandler } from 'express'
import { DomainError } from './errors.ts'

const safe = new Set(['GET', 'HEAD', 'OPTIONS'])
const equal = (a: string, b: string) => a.length === b.length && timingSafeEqual(Buffer.from(a), Buffer.from(b))

/**
 * Refuses acts that another site sent with this person's cookie: by Sec-Fetch-Site or Origin, and by the token that only our own pages can read.
 * Sign-in and single-use links carry no session yet; for them the origin alone decides.
 */
export const sameSite = (baseUrl: () => string): RequestHandler => (req, _res, next) => {
  if (safe.has(req.method)) return next()
  const refuse = () => next(new DomainError('cross-site', 'This request did not come from a page of Detent. Nothing was done; open Detent itself and do it there.'))
  const site = req.headers['sec-fetch-site']
  if (site !== undefined && site !== 'same-origin' && site !== 'none') return refuse()
  const origin = req.headers.origin
  if (origin !== undefined && origin !== new URL(baseUrl()).origin && origin !== `${req.protocol}://${req.headers.host}`) return refuse()
  if (req.session.passport?.user === undefined) return next()
  const token = req.headers['x-detent-token']
  if (typeof token !== 'string' || !req.session.token || !equal(token, req.session.token)) return refuse()
  next()
}
