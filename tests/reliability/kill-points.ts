import { cpSync, mkdirSync, rmSync } from 'node:fs'
import { join } from 'node:path'
import { Child } from './a-child.ts'
import { filledWith } from './a-rebuild.ts'
import type { Answered } from './a-client.ts'
import { killedActs, type KilledAct, type Prepared } from './a-prepared-folder.ts'
import type { Checked, Kill, KillMode, Summary } from './protocol.ts'

/** Mulberry32: the same points for the same seed. */
export function seeded(seed: number): () => number {
  let a = seed >>> 0
  return () => {
    a = (a + 0x6d2b79f5) >>> 0
    let t = Math.imul(a ^ (a >>> 15), a | 1)
    t = (t + Math.imul(t ^ (t >>> 7), t | 61)) ^ t
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296
  }
}

type Step = Extract<Kill, { at: number }>

const modes: readonly KillMode[] = ['before', 'during', 'after']

/** `count` different points out of `steps` × three modes, spread by the seed. */
export function pointsOf(steps: number, count: number, random: () => number): Step[] {
  const all = Array.from({ length: steps * modes.length }, (_, i): Step => ({ at: Math.floor(i / modes.length) + 1, mode: modes[i % modes.length] }))
  for (let i = all.length - 1; i > 0; i -= 1) {
    const j = Math.floor(random() * (i + 1))
    ;[all[i], all[j]] = [all[j], all[i]]
  }
  return all.slice(0, count)
}

export interface PointResult {
  what: string
  /** what did not hold; empty when all did */
  faults: string[]
  /** the act had happened when the process was killed; else nothing of it had */
  done: boolean
}

const grew = (before: Summary, after: Summary) => Object.fromEntries(Object.keys(before).map((k) => [k, after[k as keyof Summary] - before[k as keyof Summary]])) as unknown as Summary

/** What one act adds when it is done: all of it or nothing. */
export const added: Record<KilledAct, Summary> = {
  signing: { entries: 2, releases: 0, signatures: 1, checkpoints: 0, receipts: 1, firmwareImages: 0 },
  release: { entries: 2, releases: 1, signatures: 1, checkpoints: 1, receipts: 1, firmwareImages: 0 },
  upload: { entries: 1, releases: 0, signatures: 0, checkpoints: 0, receipts: 1, firmwareImages: 1 },
}

const same = (a: Summary, b: Summary) => JSON.stringify(a) === JSON.stringify(b)
const none: Summary = { entries: 0, releases: 0, signatures: 0, checkpoints: 0, receipts: 0, firmwareImages: 0 }

/** What the killed process left is opened by the next one: all or nothing, then the same request again, then the act once. */
async function aftermath(child: Child, folder: string, { prepared, kind, before }: { prepared: Prepared; kind: KilledAct; before: Summary }): Promise<Omit<PointResult, 'what'>> {
  const port = await child.open(folder)
  const killed = await child.check()
  const difference = grew(before, killed.summary)
  const done = same(difference, added[kind])
  const faults = [...killed.faults]
  if (!done && !same(difference, none)) faults.push(`half an act: ${JSON.stringify(difference)}`)
  const repeat: Answered = await prepared.act(kind, port)
  if (repeat.status !== prepared.status[kind]) faults.push(`the repeat was answered ${repeat.status}: ${JSON.stringify(repeat.body).slice(0, 300)}`)
  const after: Checked = await child.check()
  faults.push(...after.faults.map((f) => `after the repeat: ${f}`))
  if (!same(grew(before, after.summary), added[kind])) faults.push(`after the repeat: ${JSON.stringify(grew(before, after.summary))}`)
  await child.close()
  return { faults, done }
}

/** Counts the steps of each act, and what its database held before, on copies that are thrown away. */
export async function measure(child: Child, prepared: Prepared, work: string): Promise<{ steps: Record<KilledAct, number>; before: Summary; ms: Record<KilledAct, number> }> {
  const steps = {} as Record<KilledAct, number>
  const ms = {} as Record<KilledAct, number>
  let before: Summary | undefined
  for (const kind of killedActs) {
    const folder = join(work, `measured-${kind}`)
    cpSync(prepared.folder, folder, { recursive: true })
    const port = await child.open(folder)
    before ??= (await child.check()).summary
    await child.arm(null)
    const began = performance.now()
    const answered = await prepared.act(kind, port)
    ms[kind] = performance.now() - began
    steps[kind] = await child.steps()
    if (answered.status !== prepared.status[kind]) throw new Error(`${kind} was answered ${answered.status}: ${JSON.stringify(answered.body)}`)
    await child.close()
    rmSync(folder, { recursive: true, force: true })
  }
  return { steps, before: before!, ms }
}

/** A kill at a step that the child counts to, or after a time that the parent waits. */
export type Point = { kind: KilledAct } & ({ kill: Kill } | { afterMs: number })

export const nameOf = (point: Point) => ('kill' in point ? `${point.kind}, ${'at' in point.kill ? `${point.kill.mode} step ${point.kill.at}` : 'after its COMMIT'}` : `${point.kind}, after ${point.afterMs.toFixed(1)} ms`)

/** Kills a process in the middle of each act; each next process looks at what the one before left, and is killed in turn. */
export async function runPoints(file: string, prepared: Prepared, points: readonly Point[], { work, before, told = () => {} }: { work: string; before: Summary; told?: (result: PointResult) => void }): Promise<PointResult[]> {
  const results: PointResult[] = []
  let child = new Child(file)
  try {
    for (const [i, point] of points.entries()) {
      const folder = join(work, `point-${i}`)
      cpSync(prepared.folder, folder, { recursive: true })
      const victim = child
      const port = await victim.open(folder)
      if ('kill' in point) await victim.arm(point.kill)
      const going = prepared.act(point.kind, port).then(() => true, () => false)
      if ('afterMs' in point) setTimeout(() => victim.kill(), point.afterMs)
      // the act may be answered before the step or the moment comes; the process is killed then all the same
      if (await going) setTimeout(() => victim.kill(), 200)
      const signal = await victim.gone
      child = new Child(file)
      const found = await aftermath(child, folder, { prepared, kind: point.kind, before })
      const result = { what: nameOf(point), ...found, faults: [...(signal === 'SIGKILL' ? [] : [`the process ended by ${signal}`]), ...found.faults] }
      results.push(result)
      told(result)
      rmSync(folder, { recursive: true, force: true })
    }
    return results
  } finally {
    await child.end()
  }
}

/** Statements of bringing a new file to the present schema, and of rebuilding a table in a filled one. */
export async function countMigrationSteps(file: string, work: string): Promise<{ fresh: number; rebuild: number }> {
  const child = new Child(file)
  const folder = join(work, 'counted')
  mkdirSync(join(folder, 'filled'), { recursive: true })
  try {
    const fresh = await child.ask<number>({ do: 'migrate', folder, rebuild: false, kill: null })
    await child.ask({ do: 'fill', folder: join(folder, 'filled') })
    return { fresh, rebuild: await child.ask<number>({ do: 'migrate', folder: join(folder, 'filled'), rebuild: true, kill: null }) }
  } finally {
    await child.end()
    rmSync(folder, { recursive: true, force: true })
  }
}

/** Kills a process in the middle of migrating: a new file, or a filled one whose table is rebuilt. */
export async function runMigrations(file: string, kills: readonly (Step & { rebuild: boolean })[], { work, told = () => {} }: { work: string; told?: (result: PointResult) => void }): Promise<PointResult[]> {
  const results: PointResult[] = []
  const filled = join(work, 'filled')
  mkdirSync(filled, { recursive: true })
  let child = new Child(file)
  try {
    await child.ask({ do: 'fill', folder: filled })
    for (const [i, { rebuild, ...kill }] of kills.entries()) {
      const folder = join(work, `migrated-${i}`)
      if (rebuild) cpSync(filled, folder, { recursive: true })
      else mkdirSync(folder)
      const ended = await child.ask({ do: 'migrate', folder, rebuild, kill }).then(() => true, () => false)
      if (ended) child.kill()
      await child.gone
      child = new Child(file)
      const result = { what: `migrating ${rebuild ? 'a filled file' : 'a new file'}, ${kill.mode} step ${kill.at}`, ...(await migrated(child, folder, rebuild)) }
      results.push(result)
      told(result)
      rmSync(folder, { recursive: true, force: true })
    }
    return results
  } finally {
    await child.end()
  }
}

interface Looked {
  people: number
  grants: number
  upper: number
  rebuilt: boolean
}

/** Before or after, never between; then the migration is run to its end, and nothing is lost. */
async function migrated(child: Child, folder: string, rebuild: boolean): Promise<Omit<PointResult, 'what'>> {
  const faults: string[] = []
  const look = async () => child.ask<Looked & { faults: string[] }>({ do: 'look', folder })
  let done = false
  if (rebuild) {
    const found = await look()
    faults.push(...found.faults)
    done = found.rebuilt
    if (found.people !== filledWith || found.grants !== filledWith || found.upper !== (found.rebuilt ? filledWith : 0)) faults.push(`between: ${JSON.stringify(found)}`)
  }
  await child.ask({ do: 'migrate', folder, rebuild, kill: null })
  const found = await look()
  faults.push(...found.faults)
  if (rebuild && (!found.rebuilt || found.people !== filledWith || found.grants !== filledWith || found.upper !== filledWith)) faults.push(`after: ${JSON.stringify(found)}`)
  return { faults, done }
}
