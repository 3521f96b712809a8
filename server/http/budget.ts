import { DomainError } from './errors.ts'

interface Window {
  since: number
  spent: number
}

/** How often each person may do something within a time. Kept in memory: a restart forgives. */
export class Budget {
  private readonly windows = new Map<number, Window>()
  private readonly limit: number
  private readonly windowMs: number

  constructor({ limit, windowMs }: { limit: number; windowMs: number }) {
    this.limit = limit
    this.windowMs = windowMs
  }

  /** The person's window; a clock that went backwards begins a new one. */
  private windowOf(person: number, now: number): Window {
    const held = this.windows.get(person)
    if (held && now >= held.since && now - held.since < this.windowMs) return held
    const fresh = { since: now, spent: 0 }
    this.windows.set(person, fresh)
    return fresh
  }

  /** @throws DomainError too-many-requests when nothing is left */
  mustHaveLeft(person: number, at: Date, what: string) {
    const now = at.getTime()
    const { since, spent } = this.windowOf(person, now)
    if (spent < this.limit) return
    const seconds = Math.ceil((since + this.windowMs - now) / 1000)
    throw new DomainError('too-many-requests', `${what} Nothing was done; wait ${seconds < 90 ? `${seconds} s` : `${Math.ceil(seconds / 60)} minutes`}, then try again.`, { extra: { retryAfter: seconds } })
  }

  spend(person: number, at: Date) {
    this.windowOf(person, at.getTime()).spent += 1
  }
}

/** The budgets of one app. */
export const budgetsOf = ({ costlyPerMinute }: { costlyPerMinute: number }) => ({
  /** wrong passwords and codes of somebody who is signed in already: a stolen session guesses no further */
  guesses: new Budget({ limit: 10, windowMs: 15 * 60_000 }),
  costly: new Budget({ limit: costlyPerMinute, windowMs: 60_000 }),
})
export type Budgets = ReturnType<typeof budgetsOf>
