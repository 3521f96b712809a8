import { existsSync, readFileSync, writeFileSync } from 'node:fs'
import { arch, cpus, release, totalmem, type } from 'node:os'

const file = new URL('../RELIABILITY.md', import.meta.url)

/** What the figures were taken on. */
export const machine = () => `${cpus().length} × ${cpus()[0]?.model.trim() ?? 'unknown processor'}, ${(totalmem() / 2 ** 30).toFixed(0)} GiB, ${type()} ${release()} ${arch()}, Node ${process.version}`

/** Puts figures into their part of RELIABILITY.md, between its marks, with date and machine; the other parts stay. */
export function writeFigures(part: string, text: string, now: Date) {
  const [begin, end] = [`<!-- figures: ${part} -->`, `<!-- end of ${part} -->`]
  const old = existsSync(file) ? readFileSync(file, 'utf8') : ''
  const figures = `${begin}\nTaken on ${now.toISOString().slice(0, 16).replace('T', ' ')} UTC, ${machine()}.\n\n${text.trim()}\n${end}`
  const [from, to] = [old.indexOf(begin), old.indexOf(end)]
  if (from < 0 || to < from) throw new Error(`tests/RELIABILITY.md has no place for the figures of "${part}".`)
  writeFileSync(file, old.slice(0, from) + figures + old.slice(to + end.length))
}
