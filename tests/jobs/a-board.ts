import type { JointModel } from '../../server/control/model.ts'
import { request, type AnalysisRequest } from '../../server/jobs/analyses/requests.ts'
import { inPlace } from '../../server/jobs/in-place.ts'
import { JobBoard, type BoardOptions } from '../../server/jobs/job-board.ts'
import type { ResultStore, StoredEntry, StoredOutcome } from '../../server/jobs/results.ts'
import type { Threads } from '../../server/jobs/threads.ts'

/** A small gear motor in position mode; figures invented. */
export const aModel = (edit: Partial<JointModel['firmware']> = {}, plant: Partial<JointModel['plant']> = {}): JointModel => ({
  plant: {
    V_nom: 24, R: 1.02, R_on: 0.06, L: 0.00042, k_t: 0.0318, k_e: 0.0318, N: 64, eta: 0.8, J_rotor: 4.3e-6, J_load: 0.0185, b_rotor: 1.1e-6, b_load: 0.02, k_s: null, d_s: null, tau_c: 0.11, encoder: 'output', bits: 16, i_lsb: 0.0016,
    ...plant,
  },
  firmware: { mode: 'position', f_c: 16000, f_o: 2000, W: 14, D: 1, sensor_delay: 0, outer_delay: 0, K_pp: 36, K_ip: 0, K_pv: 3.2, K_iv: 24, K_pc: 1.2, K_ic: 3400, omega_max: 6, I_max: 2.8, d_max: 0.95, supply_compensated: true, ...edit },
  environment: { V_bus: 24, T_winding: 25 },
})

export const step = { to: 0.2, backlash: 0, source_resistance: 0 }
export const bounds = [{ name: 'k_t', unit: 'N·m/A', nominal: 0.0318, low: 0.0296, high: 0.034 }, { name: 'J_load', unit: 'kg·m²', nominal: 0.0185, low: 0.013, high: 0.0296 }]

export const aNominal = (edit: Partial<JointModel['firmware']> = {}) => request('nominal', { model: aModel(edit), step, heat: null })
export const aSweep = (edit: Partial<JointModel['firmware']> = {}) => request('tolerance', { model: aModel(edit), step, bounds })

/** A store that counts. */
export function aStore(): ResultStore & { rows: Map<string, StoredOutcome>; saves: number } {
  const rows = new Map<string, StoredOutcome>()
  const store = {
    rows,
    saves: 0,
    async load(hashes: readonly string[]) {
      return new Map(hashes.flatMap((h) => (rows.has(h) ? [[h, rows.get(h)!] as const] : [])))
    },
    async save(entries: readonly StoredEntry[]) {
      store.saves += 1
      for (const { hash, outcome } of entries) rows.set(hash, JSON.parse(JSON.stringify(outcome)) as StoredOutcome)
    },
  }
  return store
}

/** Threads that record whose tasks they did, and may be told to do otherwise. */
export function watched(width = 1, instead?: (kind: string, count: number) => Error | Promise<void> | null): Threads & { done: string[] } {
  const real = inPlace()
  const done: string[] = []
  let count = 0
  return {
    done,
    width,
    async run(task, told) {
      count += 1
      const other = instead?.(task.kind, count) ?? null
      if (other instanceof Error) throw other
      await other
      done.push('plan' in task && 'model' in task.plan ? `${task.kind} ${task.plan.model.firmware.K_pv}` : 'inputs' in task && 'model' in task.inputs ? `${task.kind} ${task.inputs.model.firmware.K_pv}` : task.kind)
      return real.run(task, told)
    },
    close: async () => {},
  }
}

export const aBoard = (options: Partial<BoardOptions> = {}) => new JobBoard({ threads: inPlace(), store: aStore(), ...options })

export const settled = (board: JobBoard, asked: AnalysisRequest[], asker = 1) => board.settle(asked, { asker })

/** Waits until a condition holds; gives up after many turns of the event loop. */
export async function until(holds: () => boolean): Promise<void> {
  for (let k = 0; k < 20_000; k += 1) {
    if (holds()) return
    await new Promise((next) => setImmediate(next))
  }
  throw new Error('it never came to hold')
}
