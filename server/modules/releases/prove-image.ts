import type { Value } from '../../../shared/parameters/machine-set.ts'
import { verifyImage } from '../../exports/verify/verify-image.ts'

/** What the second decoder finds other than the values the bytes were made from; empty when they hold. */
export function differencesFound(schema: unknown, image: Uint8Array, values: Record<string, Value>, release: number): string[] {
  const result = verifyImage({ schema, image, values, release })
  return result.kind === 'agrees' ? [] : result.differences.map((d) => d.message)
}
