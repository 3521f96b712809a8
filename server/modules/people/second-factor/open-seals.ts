import { join } from 'node:path'
import { secretFile } from '../../../db/secret-file.ts'
import { sealsOf, type Seals } from './seals.ts'

/** Name of the file in the data folder; its loss costs every second factor but no recovery code. */
export const sealKeyName = 'second-factor.key'

/** The seals of a workplace. @returns with whether their key was made now */
export function openSeals(dataDir: string): { seals: Seals; made: boolean } {
  const { secret, made } = secretFile(join(dataDir, sealKeyName), 'the key that seals second factors')
  return { seals: sealsOf(secret), made }
}
