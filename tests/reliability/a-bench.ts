import { mkdirSync, rmSync } from 'node:fs'
import { join } from 'node:path'
import { bundleChild, Child, temporary } from './a-child.ts'
import { aPreparedFolder, type Prepared } from './a-prepared-folder.ts'

/** What the tests of one file share: the bundled programs, a prepared folder, room to work in. */
export interface Bench {
  file: (entry: 'child' | 'main' | 'cli') => string
  work: string
  prepared: Prepared
  clear(): void
}

export async function aBench(name: string): Promise<Bench> {
  const bundle = bundleChild(name)
  const work = temporary()
  mkdirSync(work, { recursive: true })
  const child = new Child(bundle.file('child'))
  try {
    const prepared = await aPreparedFolder(child, join(work, 'prepared'))
    return {
      file: bundle.file,
      work,
      prepared,
      clear() {
        bundle.remove()
        rmSync(work, { recursive: true, force: true })
      },
    }
  } finally {
    await child.end()
  }
}
