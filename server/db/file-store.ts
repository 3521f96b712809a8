import { createHash, randomUUID } from 'node:crypto'
import { mkdir, open, readFile, rename, rm } from 'node:fs/promises'
import { join } from 'node:path'
import type { Readable } from 'node:stream'

/** A file that arrived and lies aside: written and synced, under no name yet. */
export interface ReceivedFile {
  readonly sha256: string
  readonly bytes: number
  /** its bytes, to be looked at before it is kept */
  content(): Promise<Buffer>
  /** takes it away unless it was kept, and lets go of it: every file that was received is let go of in the end */
  discard(): Promise<void>
}

/** Files beside the database, each under its SHA-256: what is there under a name has these bytes, or is refused. */
export interface FileStore {
  /** where they lie: a file at xx/SHA-256, xx its first two digits; made when the first file comes */
  readonly directory: string
  /** Streams a file aside. @throws FileTooLarge past `limit` bytes, and then nothing is left of it */
  receive(source: Readable, limit: number): Promise<ReceivedFile>
  /** Gives a received file its name, for good: synced before it returns. */
  keep(file: ReceivedFile): Promise<void>
  /** @throws StoredFileProblem when it is missing, or its bytes are not the ones its name states */
  read(sha256: string): Promise<Buffer>
  /**
   * Takes a file away that nothing names any more. @returns false, and leaves it, while somebody who received the same bytes has not let go of
   * them: a row may be about to name it
   */
  remove(sha256: string): Promise<boolean>
}

export class FileTooLarge extends Error {}

/** A stored file that cannot be handed out. */
export class StoredFileProblem extends Error {
  readonly sha256: string
  readonly what: 'missing' | 'altered'
  constructor(sha256: string, what: 'missing' | 'altered') {
    super(what === 'missing' ? `the stored file ${sha256} is missing` : `the stored file ${sha256} has other bytes than its name states`)
    this.name = 'StoredFileProblem'
    this.sha256 = sha256
    this.what = what
  }
}

/** Where a store in this directory keeps the file of this SHA-256. */
export const placeIn = (directory: string, sha256: string) => join(directory, sha256.slice(0, 2), sha256)

/** A directory's entries reach the disk only when the directory itself is synced. */
export async function syncDirectory(path: string) {
  const handle = await open(path, 'r')
  try {
    await handle.sync()
  } finally {
    await handle.close()
  }
}

class Received implements ReceivedFile {
  readonly path: string
  readonly sha256: string
  readonly bytes: number
  private release: (() => void) | null
  constructor(path: string, sha256: string, bytes: number, release: () => void) {
    this.path = path
    this.sha256 = sha256
    this.bytes = bytes
    this.release = release
  }
  content = () => readFile(this.path)
  discard = async () => {
    await rm(this.path, { force: true })
    this.release?.()
    this.release = null
  }
}

/** Counts who has which file in hand. */
class Holds {
  private readonly counts = new Map<string, number>()
  has = (sha256: string) => this.counts.has(sha256)
  /** @returns lets go again */
  take(sha256: string): () => void {
    this.counts.set(sha256, (this.counts.get(sha256) ?? 0) + 1)
    return () => {
      const left = this.counts.get(sha256)! - 1
      if (left > 0) this.counts.set(sha256, left)
      else this.counts.delete(sha256)
    }
  }
}

/** The store in a directory, made when the first file comes. What was left half received by a stop is taken away with the first file. */
export function fileStore(directory: string): FileStore {
  const aside = join(directory, 'aside')
  const placeOf = (sha256: string) => placeIn(directory, sha256)
  const holds = new Holds()
  const removals = new Map<string, Promise<unknown>>()
  let ready: Promise<unknown> | undefined
  const prepare = () =>
    (ready ??= rm(aside, { recursive: true, force: true }).then(() => mkdir(aside, { recursive: true, mode: 0o700 })))

  return {
    directory,

    async receive(source, limit) {
      await prepare()
      const path = join(aside, randomUUID())
      const handle = await open(path, 'wx', 0o600)
      const hash = createHash('sha256')
      let bytes = 0
      try {
        for await (const chunk of source as AsyncIterable<Buffer>) {
          bytes += chunk.length
          if (bytes > limit) throw new FileTooLarge(`more than ${limit} bytes`)
          hash.update(chunk)
          // write() may take less than it is given
          for (let at = 0; at < chunk.length; ) at += (await handle.write(chunk, at)).bytesWritten
        }
        await handle.sync()
      } catch (error) {
        await rm(path, { force: true })
        throw error
      } finally {
        await handle.close()
      }
      const sha256 = hash.digest('hex')
      return new Received(path, sha256, bytes, holds.take(sha256))
    },

    async keep(file) {
      if (!(file instanceof Received)) throw new TypeError('only a file that this store received can be kept')
      // a removal that began before these bytes arrived must not take away what is kept now
      await removals.get(file.sha256)
      const place = placeOf(file.sha256)
      const folder = join(place, '..')
      const made = await mkdir(folder, { recursive: true, mode: 0o700 })
      // in one step, over whatever lies there: the same bytes, or bytes that were altered and are now good again
      await rename(file.path, place)
      await syncDirectory(folder)
      if (made !== undefined) await syncDirectory(directory)
    },

    async read(sha256) {
      if (!/^[0-9a-f]{64}$/.test(sha256)) throw new StoredFileProblem(sha256, 'missing')
      const bytes = await readFile(placeOf(sha256)).catch((error: NodeJS.ErrnoException) => {
        if (error.code === 'ENOENT') throw new StoredFileProblem(sha256, 'missing')
        throw error
      })
      if (createHash('sha256').update(bytes).digest('hex') !== sha256) throw new StoredFileProblem(sha256, 'altered')
      return bytes
    },

    async remove(sha256) {
      if (!/^[0-9a-f]{64}$/.test(sha256) || holds.has(sha256)) return false
      const place = placeOf(sha256)
      const removal = rm(place, { force: true })
      removals.set(sha256, removal)
      try {
        await removal
      } finally {
        removals.delete(sha256)
      }
      await syncDirectory(join(place, '..')).catch((error: NodeJS.ErrnoException) => {
        if (error.code !== 'ENOENT') throw error
      })
      return true
    },
  }
}
