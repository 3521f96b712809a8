import { execFileSync, spawnSync } from 'node:child_process'
import { cpSync, mkdirSync, rmSync, statSync, statfsSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import type { Child } from './a-child.ts'

/** Takes the room away that a running child writes into, and gives it back. */
export interface NoRoom {
  name: string
  /** where the child's folder lies */
  folder: string
  take(child: Child): void
  give(child: Child): void
  clear(): void
}

/** A small file system of its own, filled up: ENOSPC, as on a full disk. Null where none may be mounted (it takes the rights of root). */
export function smallFileSystem(prepared: string, work: string): NoRoom | null {
  const place = join(work, 'small')
  mkdirSync(place)
  if (spawnSync('mount', ['-t', 'tmpfs', '-o', 'size=12m', 'tmpfs', place]).status !== 0) return null
  const folder = join(place, 'folder')
  cpSync(prepared, folder, { recursive: true })
  const ballast = join(place, 'ballast')
  return {
    name: 'a full file system',
    folder,
    take() {
      const { bavail, bsize } = statfsSync(place)
      writeFileSync(ballast, Buffer.alloc(bavail * bsize))
      if (statfsSync(place).bavail !== 0) throw new Error(`${statSync(ballast).size} bytes did not fill ${place}`)
    },
    give: () => rmSync(ballast),
    clear: () => void execFileSync('umount', [place]),
  }
}

/** No file may grow past 4 KiB: EFBIG, for anybody. prlimit belongs to util-linux. */
export function fileSizeLimit(prepared: string, work: string): NoRoom {
  const folder = join(work, 'limited')
  cpSync(prepared, folder, { recursive: true })
  const limit = (child: Child, bytes: string) => void execFileSync('prlimit', [`--pid=${child.pid}`, `--fsize=${bytes}:`])
  return { name: 'a limit on the size of files', folder, take: (child) => limit(child, '4096'), give: (child) => limit(child, 'unlimited'), clear: () => {} }
}
