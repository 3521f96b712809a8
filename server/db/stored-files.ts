import { createHash } from 'node:crypto'
import { createReadStream } from 'node:fs'
import { chmod, copyFile, link, mkdir, open, readdir, rename, rm } from 'node:fs/promises'
import { join } from 'node:path'
import { placeIn, syncDirectory } from './file-store.ts'

const nothingThere = (error: NodeJS.ErrnoException): string[] => {
  if (error.code === 'ENOENT') return []
  throw error
}

/** SHA-256 of every file that a store's directory holds, sorted; what has no such name is none of the store's. */
export async function listStored(directory: string): Promise<string[]> {
  const found: string[] = []
  for (const folder of await readdir(directory).catch(nothingThere)) {
    if (!/^[0-9a-f]{2}$/.test(folder)) continue
    found.push(...(await readdir(join(directory, folder))).filter((name) => /^[0-9a-f]{64}$/.test(name) && name.startsWith(folder)))
  }
  return found.sort()
}

/** SHA-256 of a file on the disk, read through without holding it; null when it is not there. */
export async function hashOfFile(path: string): Promise<{ sha256: string; bytes: number } | null> {
  const hash = createHash('sha256')
  let bytes = 0
  try {
    for await (const chunk of createReadStream(path) as AsyncIterable<Buffer>) {
      hash.update(chunk)
      bytes += chunk.length
    }
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'ENOENT') return null
    throw error
  }
  return { sha256: hash.digest('hex'), bytes }
}

export async function syncFile(path: string) {
  const handle = await open(path, 'r')
  try {
    await handle.sync()
  } finally {
    await handle.close()
  }
}

/** A file system that has no hard links, or another one than the source's. */
const noLink = new Set(['EXDEV', 'EPERM', 'EMLINK', 'ENOTSUP', 'EOPNOTSUPP', 'ENOSYS', 'EACCES'])

/** A second name for the same file where the file system can (it costs no room, and a stored file is never written into), else a copy. */
async function linkOrCopy(from: string, to: string): Promise<void> {
  try {
    await link(from, to)
  } catch (error) {
    const { code } = error as NodeJS.ErrnoException
    if (!code || !noLink.has(code)) throw error
    await copyFile(from, to)
    await chmod(to, 0o600)
    await syncFile(to)
  }
}

/** Puts a file at a second place, in one step, over whatever lies there. */
export async function putAlso(from: string, to: string): Promise<void> {
  const aside = `${to}.aside`
  await rm(aside, { force: true })
  await linkOrCopy(from, aside)
  await rename(aside, to)
  // POSIX: renaming one name of a file to another name of the same file does nothing
  await rm(aside, { force: true })
}

/** What is wrong with stored files: each is named by its SHA-256. */
export interface FileTrouble {
  sha256: string
  what: 'missing' | 'altered'
}

export interface Transfer {
  files: string[]
  bytes: number
  trouble: FileTrouble[]
}

/** Puts stored files into another store's directory, each read through and held against its name; what is not as its name states is left out and named. */
export async function transferStored(from: string, to: string, files: readonly string[]): Promise<Transfer> {
  const done: Transfer = { files: [], bytes: 0, trouble: [] }
  const folders = new Set<string>()
  for (const sha256 of files) {
    const found = await hashOfFile(placeIn(from, sha256))
    if (found?.sha256 !== sha256) {
      done.trouble.push({ sha256, what: found ? 'altered' : 'missing' })
      continue
    }
    const folder = join(to, sha256.slice(0, 2))
    if (!folders.has(folder)) await mkdir(folder, { recursive: true, mode: 0o700 })
    folders.add(folder)
    await putAlso(placeIn(from, sha256), placeIn(to, sha256))
    done.files.push(sha256)
    done.bytes += found.bytes
  }
  for (const folder of folders) await syncDirectory(folder)
  if (folders.size > 0) await syncDirectory(to)
  return done
}
