import { spawn, spawnSync, type ChildProcess } from 'node:child_process'
import { mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { projectRoot } from '../../server/project-root.ts'
import type { Ask, Checked, Kill } from './protocol.ts'

/** Bundles the child once; its folder lies inside the project, where the packages are found. */
export function bundleChild(name: string): { file: (entry: 'child' | 'main' | 'cli') => string; remove: () => void } {
  const folder = join(projectRoot(), '.build', `reliability-${name}-${process.pid}`)
  const { status, stderr } = spawnSync(process.execPath, [join(projectRoot(), 'tests/reliability/build-child.mjs'), folder], { encoding: 'utf8' })
  if (status !== 0) throw new Error(`the child could not be bundled: ${stderr}`)
  return { file: (entry) => join(folder, `${entry}.js`), remove: () => rmSync(folder, { recursive: true, force: true }) }
}

export const temporary = () => mkdtempSync(join(tmpdir(), 'detent-reliability-'))

/** Longest that one question may take on a busy machine. */
const patienceMs = 300_000

/** The child process as its parent sees it. */
export class Child {
  private readonly process: ChildProcess
  private readonly waiting = new Map<number, { done: (value: unknown) => void; fail: (error: Error) => void }>()
  private count = 0
  readonly gone: Promise<NodeJS.Signals | null>

  constructor(file: string, nodeOptions: readonly string[] = []) {
    this.process = spawn(process.execPath, [...nodeOptions, file], { stdio: ['ignore', 'inherit', 'inherit', 'ipc'] })
    this.process.on('message', (told: { id: number; result?: unknown; error?: string }) => {
      const waiting = this.waiting.get(told.id)
      this.waiting.delete(told.id)
      if (told.error !== undefined) waiting?.fail(new Error(told.error))
      else waiting?.done(told.result)
    })
    this.gone = new Promise((done) => {
      this.process.on('exit', (_code, signal) => {
        for (const { fail } of this.waiting.values()) fail(new Error('the child is gone'))
        this.waiting.clear()
        done(signal)
      })
    })
  }

  async ask<T>(ask: Ask): Promise<T> {
    this.count += 1
    const id = this.count
    let timer: NodeJS.Timeout | undefined
    try {
      return await new Promise<T>((done, fail) => {
        this.waiting.set(id, { done: done as (value: unknown) => void, fail })
        timer = setTimeout(() => fail(new Error(`the child did not answer "${ask.do}" in ${patienceMs} ms`)), patienceMs)
        this.process.send({ id, ...ask }, (error) => error && fail(error))
      })
    } finally {
      clearTimeout(timer)
    }
  }

  open = (folder: string) => this.ask<number>({ do: 'open', folder })
  close = () => this.ask<null>({ do: 'close' })
  check = () => this.ask<Checked>({ do: 'check' })
  arm = (kill: Kill | null) => this.ask<null>({ do: 'arm', kill })
  steps = () => this.ask<number>({ do: 'steps' })

  get pid(): number {
    return this.process.pid!
  }

  /** SIGKILL from outside, whatever it is doing. */
  kill() {
    this.process.kill('SIGKILL')
  }

  async end() {
    if (this.process.exitCode === null && this.process.signalCode === null) this.kill()
    await this.gone
  }
}
