import { linkSync, readFileSync, rmSync, writeFileSync } from 'node:fs'

/** Two processes would write past each other: the second one is refused. */
export class DatabaseInUse extends Error {
  constructor(file: string, holder?: number) {
    super(`${file} is in use by ${holder === undefined ? 'another process' : `process ${holder}`}. One process serves a database; stop that one first, or set DETENT_DATA to another folder.`)
    this.name = 'DatabaseInUse'
  }
}

/** When a process began, in ticks since the machine's start, and which start that was: tells a process from a later one of the same number. */
function beginningOf(pid: number): string {
  try {
    const boot = readFileSync('/proc/sys/kernel/random/boot_id', 'utf8').trim()
    // proc_pid_stat(5): field 22; the second one, the name, may hold spaces and brackets.
    const began = readFileSync(`/proc/${pid}/stat`, 'utf8').replace(/^.*\)/s, '').trim().split(' ')[19]
    return `${boot} ${began}`
  } catch {
    return ''
  }
}

const alive = (pid: number): boolean => {
  try {
    process.kill(pid, 0)
    return true
  } catch (error) {
    return (error as NodeJS.ErrnoException).code === 'EPERM'
  }
}

const line = (pid: number) => `${pid} ${beginningOf(pid)}`.trim()

/** The process that a lock names, when it still runs. Where beginnings can't be read, a living process of that number is taken for it, except this one. */
function holderOf(text: string): number | null {
  const named = text.trim()
  const pid = Number(named.split(' ')[0])
  if (!Number.isInteger(pid) || pid <= 0 || !alive(pid)) return null
  if (named.includes(' ')) return named === line(pid) ? pid : null
  return pid === process.pid ? null : pid
}

const readIf = (file: string): string | null => {
  try {
    return readFileSync(file, 'utf8')
  } catch {
    return null
  }
}

/**
 * Holds the database for this process alone, and names the holder to whoever comes second.
 *
 * A lock left by a process that is gone is taken over, also when its number belongs to another process by now. This file names the holder;
 * what keeps two processes apart even in a race for a stale lock is SQLite's exclusive lock on the database itself (terms.ts).
 *
 * @returns what releases the hold
 * @throws DatabaseInUse naming the process that holds it
 */
export function holdDatabase(file: string): () => void {
  const lock = `${file}.lock`
  const own = line(process.pid)
  const draft = `${lock}.${process.pid}`
  writeFileSync(draft, own, { mode: 0o600 })
  try {
    for (let attempt = 0; attempt < 3; attempt += 1) {
      try {
        // in one step with its content: nobody reads an empty lock
        linkSync(draft, lock)
        return () => {
          if (readIf(lock) === own) rmSync(lock, { force: true })
        }
      } catch (error) {
        if ((error as NodeJS.ErrnoException).code !== 'EEXIST') throw error
      }
      const text = readIf(lock)
      const holder = text === null ? null : holderOf(text)
      if (holder !== null) throw new DatabaseInUse(file, holder)
      rmSync(lock, { force: true })
    }
  } finally {
    rmSync(draft, { force: true })
  }
  throw new Error(`${lock} could not be taken; another process is starting on the same database. Try again.`)
}
