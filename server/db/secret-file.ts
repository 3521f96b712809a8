import { randomBytes } from 'node:crypto'
import { closeSync, existsSync, fsyncSync, openSync, readFileSync, statSync, writeSync } from 'node:fs'
import { dirname } from 'node:path'

/** Shortest secret that is taken, in bytes: 256 bits. */
const leastBytes = 32

/**
 * A secret in a file beside the database: made at the first start, for its owner alone.
 *
 * @returns its bytes, and whether it was made now
 * @throws Error when others may read it, when it is too short, or when it is made of a few bytes over and over
 */
export function secretFile(path: string, what: string): { secret: Buffer; made: boolean } {
  const made = !existsSync(path)
  if (made) {
    const handle = openSync(path, 'wx', 0o600)
    try {
      writeSync(handle, `${randomBytes(48).toString('base64url')}\n`)
      fsyncSync(handle)
    } finally {
      closeSync(handle)
    }
    const directory = openSync(dirname(path), 'r')
    fsyncSync(directory)
    closeSync(directory)
  }
  const mode = statSync(path).mode & 0o777
  if ((mode & 0o077) !== 0) throw new Error(`${path} may be read by others (mode ${mode.toString(8)}). It holds ${what}: take the right away (chmod 600 ${path}), and put another in its place if anybody may have read it.`)
  const secret = Buffer.from(readFileSync(path, 'utf8').trim(), 'base64url')
  if (secret.length < leastBytes || new Set(secret).size < leastBytes / 2)
    throw new Error(`${path} is too weak for ${what}: it takes at least ${leastBytes} random bytes in base64url. Take the file away, and one is made at the next start.`)
  return { secret, made }
}
