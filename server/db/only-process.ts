import { openSync, closeSync, readFileSync, unlinkSync, writeSync } from 'node:fs'

const alive = (pid: number): boolean => {
  try {
    process.kill(pid, 0)
    return true
  } catch (error) {
    return (error as NodeJS.ErrnoException).code === 'EPERM'
  }
}

/**
 * Holds the database for this process alone; two would write past each other. A lock left by a process that is gone is taken over.
 *
 * @returns what releases the hold
 * @throws Error naming the process that holds it
 */
export function holdDatabase(file: string): () => void {
  const lock = `${file}.lock`
  for (let attempt = 0; attempt < 3; attempt += 1) {
    try {
      const handle = openSync(lock, 'wx', 0o600)
      writeSync(handle, String(process.pid))
      closeSync(handle)
      return () => unlinkSync(lock)
    } catch (error) {
      if ((error as NodeJS.ErrnoException).code !== 'EEXIST') throw error
    }
    const holder = Number(readFileSync(lock, 'utf8'))
    if (Number.isInteger(holder) && holder > 0 && holder !== process.pid && alive(holder))
      throw new Error(`${file} is in use by process ${holder}. One process serves a database; stop that one first, or set DETENT_DATA to another folder.`)
    unlinkSync(lock)
  }
  throw new Error(`${lock} could not be taken; another process is starting on the same database. Try again.`)
}
