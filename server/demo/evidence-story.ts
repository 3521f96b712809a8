import { createHash } from 'node:crypto'
import { Readable } from 'node:stream'
import { gzipSync } from 'node:zlib'
import { setOf } from '../modules/changes/read-set.ts'
import type { Change } from '../modules/changes/change.entity.ts'
import { again as againChange } from '../modules/changes/locate.ts'
import { proposeMapping } from '../modules/evidence/choose-mapping.ts'
import { again } from '../modules/evidence/locate.ts'
import { beginReading, readingEnded } from '../modules/evidence/readings.ts'
import { layoutOf, receiveEvidence } from '../modules/evidence/receive-evidence.ts'
import { schemasFor } from '../modules/firmware/schemas-for.ts'
import { newestRelease } from '../modules/machines/current-release.ts'
import { Machine } from '../modules/machines/machine.entity.ts'
import type { Services } from '../http/services.ts'
import { benchLogOfRun, csvOf, positionColumns, velocityColumns, type BenchRun } from './bench-log-text.ts'
import type { Story } from './story.ts'

export interface LogTold {
  machine: string
  by: string
  name: string
  run: BenchRun
  change?: Change
  /** as a logger of another country writes it */
  comma?: true
}

/** A run on the bench by simulation, uploaded and read as anybody's log is. */
export async function tellLog(story: Story, services: Services, { machine, by, name, run, change, comma }: LogTold): Promise<void> {
  const em = services.orm.em.fork()
  const found = await em.findOneOrFail(Machine, { key: machine })
  const set = change ? setOf((await againChange(em, change)).text) : (await newestRelease(em, found))!.set
  const { log, model } = benchLogOfRun(set, new Map(Object.entries((await schemasFor(em, set)).schemas)), run)
  const columns = model.firmware.mode === 'position' ? positionColumns : velocityColumns
  const text = Buffer.from(csvOf(log, columns, comma ? { delimiter: ';', decimal: ',' } : {}))
  const file = await services.files.receive(Readable.from([gzipSync(text, { level: 1 })]), text.length + 1000)
  await services.files.keep(file)
  const upload = { name, file, original: { sha256: createHash('sha256').update(text).digest('hex'), bytes: text.length, head: text.subarray(0, 65_536) } }
  const layout = layoutOf(upload)
  const evidence = await story.act(async (tx, now) =>
    receiveEvidence(tx, { machine: await tx.findOneOrFail(Machine, { key: machine }), change: change ? await againChange(tx, change) : null, joint: run.joint, upload, layout, person: await story.person(tx, by), now }),
  )
  await file.discard()
  const { mapping } = await proposeMapping(services.orm.em.fork(), found, layout)
  const { now } = story
  const fork = services.orm.em.fork()
  const then = { ...services, now: () => now }
  beginReading(then, await again(fork, evidence), { mapping, person: await story.person(fork, by) })
  await readingEnded(then, evidence)
}

/** There and back by steps, so that the joint accelerates and brakes hard both ways. */
export const backAndForth = (size: number): Pick<BenchRun, 'times' | 'values' | 'seconds'> => ({
  times: [0, 0.02, 0.16, 0.3, 0.42, 0.55, 0.68, 0.8], values: [0, size, -size / 2, size * 1.5, 0, size / 2, -size, 0], seconds: 0.9,
})

/** Steady speeds, slow to fast, both ways. */
const speeds = (fastest: number): Pick<BenchRun, 'times' | 'values' | 'seconds'> => ({
  times: [0, 0.05, 0.25, 0.45, 0.65, 0.85, 1.05], values: [0, fastest / 3, fastest, fastest / 2, -fastest / 3, -fastest, 0], seconds: 1.2,
})

/** Logs that stand at joints, for no change in particular. */
export async function evidenceStory(story: Story, services: Services): Promise<void> {
  const [tobias, mirela] = ['Tobias Oyelaran', 'Mirela Castanho']
  await tellLog(story, services, { machine: 'dunlin', by: tobias, name: 'r2-hip-stand-test.csv', run: { joint: 'r2-hip', ...backAndForth(0.3), every: 10, seed: 2, really: { R: 1.04, J_load: 1.1, tau_c: 1.3 } } })
  await tellLog(story, services, { machine: 'dunlin', by: tobias, name: 'winch-lift.csv', comma: true, run: { joint: 'winch', ...speeds(6), every: 16, seed: 3, really: { R: 1.06, b_load: 1.2 } } })
  await tellLog(story, services, { machine: 'teasel', by: mirela, name: 'belt-run-in.csv', run: { joint: 'belt', ...speeds(10), every: 16, seed: 4, really: { J_load: 1.15, tau_c: 1.2 } } })
}
