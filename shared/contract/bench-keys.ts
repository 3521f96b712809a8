import { Type, type Static } from '@sinclair/typebox'
import { Key } from '../parameters/machine-set.ts'

const strict = { additionalProperties: false }

export const longestBenchKeyDays = 365

export const MakeBenchKey = Type.Object(
  {
    name: Type.String({ minLength: 1, maxLength: 80, pattern: '\\S', description: 'where it is used: "bench two"' }),
    machines: Type.Array(Key, { minItems: 1, maxItems: 100, uniqueItems: true }),
    days: Type.Integer({ minimum: 1, maximum: longestBenchKeyDays, description: 'how long it holds' }),
    password: Type.String({ minLength: 1, maxLength: 200, description: 'the maker\'s own, typed again' }),
  },
  strict,
)
export type MakeBenchKey = Static<typeof MakeBenchKey>

export interface BenchKeyView {
  id: number
  name: string
  /** first characters, to tell keys apart */
  begins: string
  machines: string[]
  createdAt: string
  expiresAt: string
  revokedAt: string | null
  lastUsedAt: string | null
  state: 'in use' | 'expired' | 'revoked'
}

export interface BenchKeys {
  keys: BenchKeyView[]
  /** machines that this person may make keys for, each with a joint of its current release and its board, for examples */
  machines: { key: string; name: string; currentVersion: string | null; joint: string | null; serial: string | null }[]
}

/** The key itself is in this answer and nowhere else. */
export interface MadeBenchKey extends BenchKeys {
  made: BenchKeyView
  /** null in the answer to a repeat: it is told once */
  secret: string | null
}
