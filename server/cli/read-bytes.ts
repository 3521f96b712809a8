import { readFileSync, statSync } from 'node:fs'

const words: Readonly<Record<string, string>> = { ENOENT: 'there is no such file', ENOTDIR: 'there is no such file', EACCES: 'it may not be read' }

/** Bytes of a file of bounded size. @throws Error saying what is wrong with it */
export function readBytes(file: string, most: number): Uint8Array {
  try {
    const found = statSync(file)
    if (!found.isFile()) throw new Error(found.isDirectory() ? 'it is a folder' : 'it is no plain file')
    if (found.size > most) throw new Error(`${found.size} bytes are more than the ${most} that are read`)
    return new Uint8Array(readFileSync(file))
  } catch (error) {
    const { code, message } = error as NodeJS.ErrnoException
    throw new Error(`${file}: ${words[code ?? ''] ?? message}.`)
  }
}
