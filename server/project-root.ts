import { existsSync } from 'node:fs'
import { dirname, join } from 'node:path'
import { fileURLToPath } from 'node:url'

/** The project's folder, from sources and from the bundle alike: the nearest one above that holds package.json. */
export function projectRoot(): string {
  let here = dirname(fileURLToPath(import.meta.url))
  while (!existsSync(join(here, 'package.json'))) {
    const up = dirname(here)
    if (up === here) throw new Error('The program stands outside its project folder: no package.json above it.')
    here = up
  }
  return here
}
