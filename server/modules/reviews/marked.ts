import canonicalize from 'canonicalize'
import type { Marked } from '../../../shared/contract/reviews.ts'
import { sha256 } from '../checks/resolve-joint.ts'

/** A row of the diff before it bears a key and a hash. */
export type Plain<T extends Marked> = Omit<T, keyof Marked>

/** Names a row and hashes what it says; `of` is what else it stands for, such as the joints folded into it. */
export const marked = <T extends object>(row: T, { key, pointer, of = null }: { key: string; pointer: string; of?: unknown }): T & Marked => ({ ...row, key, pointer, hash: sha256(canonicalize({ row, pointer, of })!) })
