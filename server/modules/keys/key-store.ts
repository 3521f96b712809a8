import { createPrivateKey, type KeyObject } from 'node:crypto'
import { closeSync, existsSync, fchmodSync, fsyncSync, openSync, readFileSync, renameSync, rmSync, statSync, writeSync } from 'node:fs'
import { join } from 'node:path'

/**
 * Where the workplace's private key lies. Another key is laid beside it first, and takes its place only after the database names it: a
 * stop in between loses neither.
 */
export interface KeyStore {
  /** @throws Error when what lies there is no key, or others may read it */
  inUse(): KeyObject | null
  laidBeside(): KeyObject | null
  lay(key: KeyObject): void
  /** The key laid beside takes the place of the one in use. */
  adopt(): void
  takeAway(): void
}

/** Ed25519 private keys as PKCS #8 PEM files in a directory, for their owner alone. */
export function keyFiles(directory: string): KeyStore {
  const file = join(directory, 'workplace.key')
  const beside = join(directory, 'workplace.key.next')

  const sync = (path: string) => {
    const handle = openSync(path, 'r')
    fsyncSync(handle)
    closeSync(handle)
  }

  const read = (path: string): KeyObject | null => {
    if (!existsSync(path)) return null
    const mode = statSync(path).mode & 0o777
    if ((mode & 0o077) !== 0) throw new Error(`${path} may be read by others (mode ${mode.toString(8)}). It signs release kits: take the right away (chmod 600 ${path}), and rotate the key if anybody may have read it.`)
    let key: KeyObject
    try {
      key = createPrivateKey(readFileSync(path))
    } catch {
      throw new Error(`${path} holds no private key in PEM. Put the workplace's key back; without the file a new key is made and recorded.`)
    }
    if (key.asymmetricKeyType !== 'ed25519') throw new Error(`${path} holds a key of type ${key.asymmetricKeyType ?? 'unknown'}; the workplace signs with Ed25519.`)
    return key
  }

  return {
    inUse: () => read(file),
    laidBeside: () => read(beside),
    lay(key) {
      rmSync(beside, { force: true })
      const handle = openSync(beside, 'wx', 0o600)
      try {
        fchmodSync(handle, 0o600)
        writeSync(handle, key.export({ type: 'pkcs8', format: 'pem' }).toString())
        fsyncSync(handle)
      } finally {
        closeSync(handle)
      }
      sync(directory)
    },
    adopt() {
      renameSync(beside, file)
      sync(directory)
    },
    takeAway: () => rmSync(beside, { force: true }),
  }
}
