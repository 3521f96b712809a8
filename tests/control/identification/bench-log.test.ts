import { describe, expect, it } from 'vitest'
import { checkLog } from '../../../server/control/identification/bench-log.ts'
import type { BenchLog } from '../../../server/control/identification/bench-log.ts'

function ramp(rows: number, dt = 0.001): BenchLog {
  const time = Float64Array.from({ length: rows }, (_, k) => k * dt)
  return { time, current: time.map((t) => Math.sin(50 * t)), position: time.map((t) => 1 - Math.cos(20 * t)), speed: time.map((t) => 20 * Math.sin(20 * t)) }
}

describe('a log looked over', () => {
  it('passes a clean one unchanged', () => {
    const log = ramp(500)
    expect(checkLog(log)).toEqual({ log, dt: expect.closeTo(0.001, 12), stretches: [{ from: 0, to: 500 }], repairs: [] })
  })

  it('leaves repeated rows out and says so', () => {
    const log = ramp(500)
    log.time[10] = log.time[9]
    log.time[11] = log.time[9]
    const { log: kept, repairs } = checkLog(log)
    expect(kept.time.length).toBe(498)
    expect(kept.current[10]).toBe(log.current[12])
    expect(repairs[0]).toMatch(/^2 rows repeated/)
  })

  it('splits at gaps and says so', () => {
    const log = ramp(500)
    for (let k = 200; k < 500; k++) log.time[k] += 0.5
    const { stretches, repairs } = checkLog(log)
    expect(stretches).toEqual([{ from: 0, to: 200 }, { from: 200, to: 500 }])
    expect(repairs[0]).toMatch(/^1 gaps/)
  })

  it('states jitter and works with the stated times', () => {
    const log = ramp(500)
    for (let k = 1; k < 500; k += 2) log.time[k] += 0.0004
    expect(checkLog(log).repairs[0]).toMatch(/varies by up to \d+ %/)
  })

  it.each<[string, string, (log: BenchLog) => BenchLog]>([
    ['log.time', 'bad-input', (log) => ({ ...log, time: log.time.map((t) => -t) })],
    ['log.time', 'bad-input', (log) => ({ ...log, time: log.time.map((t) => 1000 * t) })],
    ['log.time', 'bad-input', (log) => ({ ...log, time: log.time.fill(0) })],
    ['log.time', 'bad-input', () => ramp(20)],
    ['log.time', 'too-large', () => ramp(1_000_001, 1e-5)],
    ['log.current', 'not-finite', (log) => ({ ...log, current: log.current.with(7, NaN) })],
    ['log.position', 'bad-input', (log) => ({ ...log, position: new Float64Array(3) })],
    ['log.speed', 'bad-input', (log) => ({ ...log, speed: (log.speed as Float64Array).map((w) => (w * 180) / Math.PI) })],
    ['log.speed', 'bad-input', (log) => ({ ...log, speed: (log.speed as Float64Array).map((w) => (w * 30) / Math.PI) })],
  ])('refuses %s: %s', (field, code, spoil) => {
    expect(() => checkLog(spoil(ramp(500)))).toThrow(expect.objectContaining({ code, details: expect.objectContaining({ field }) }))
  })
})
