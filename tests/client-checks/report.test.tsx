// @vitest-environment jsdom
import '../components/setup-dom.ts'
import { fireEvent, screen, waitFor } from '@testing-library/react'
import { describe, expect, it } from 'vitest'
import type { JointReportView, JointSide, MapView } from '../../shared/contract/checks.ts'
import type { StartingValuesView } from '../../shared/contract/proposals.ts'
import { aChange } from '../client-changes/a-change.ts'
import { aCheck, figures, finding } from '../client-changes/a-check.ts'
import { anApi, mirela, open, refusal } from '../client-changes/a-desk.tsx'

const curve = { hz: [1, 10, 100], openDb: [20, 0, -20], openPhaseDeg: [-90, -133.6, -200], closedDb: [0, 0, -20], closedPhaseDeg: [0, -45, -90] }
const side = (): JointSide => ({ figures: figures(), curves: { velocity: curve }, step: null, stepAtWorst: null, clamps: { speed: 6, current: 3, voltage: 22.8 } })
const corner = (gain: number) => ({ velocity: { verdict: 'stable' as const, phaseMarginDeg: 40, gainMarginDb: gain } })
const bounds = [{ name: 'T_winding', unit: '°C', nominal: 25, low: 15, high: 105 }, { name: 'k_t', unit: 'N·m/A', nominal: 0.03, low: 0.0279, high: 0.0321 }]
const at = { kind: 'vertex' as const, index: 0, values: { T_winding: 105, k_t: 0.0321 } }
const swept = {
  bounds, vertexNames: ['T_winding', 'k_t'], vertices: { points: 2, stable: 2, boundary: 0, unstable: 0 }, samples: { points: 256, stable: 256, boundary: 0, unstable: 0 }, samplesWithMargins: 64,
  worstRho: { value: 0.995, at }, loops: {}, worstVertex: at, stepAtWorst: null, peakCurrentA: null, stepsRun: 0,
}
const report: JointReportView = {
  joint: 'l1-knee', touched: true, alike: ['l1-knee', 'r3-knee'], candidate: { ...side(), figures: figures({ tolerance: swept }) }, released: side(),
  vertices: [
    { index: 0, values: at.values, rho: 0.995, verdict: 'stable', loops: corner(6.5), released: corner(9.1) },
    { index: 1, values: { T_winding: 15, k_t: 0.0279 }, rho: 0.994, verdict: 'stable', loops: corner(8.3), released: corner(10.9) },
  ],
  findings: [finding({ key: 'worst gain margin/velocity/knee', kind: 'worst gain margin', loop: 'velocity', limit: 7, value: 6.5, unit: 'dB', text: 'The velocity loop has 6.5 dB at its worst corner.', source: 'team policy' })],
  modelVersion: '1', policyNumber: 3, complete: true, progress: { done: 1, total: 1, state: 'done', problem: '' },
}
const axis = (parameter: 'K_pv' | 'K_iv', values: number[], name: string) => ({ parameter, unit: '', values, spacing: 'equal steps' as const, pointer: `/families/knee/values/${name}`, perSi: 1 })
const map: MapView = {
  hash: 'c', joint: 'l1-knee', x: axis('K_pv', [2, 4], 'velocityGain'), y: axis('K_iv', [20, 40], 'velocityIntegralGain'), progress: { done: 4, total: 4, state: 'done', problem: '' },
  cells: { verdicts: ['stable', 'stable', 'stable', 'unstable'], rho: [0.9, 0.9, 0.9, 1.1], phaseMarginDeg: [60, 50, 40, null], gainMarginDb: [12, 9, 8, null] }, candidate: { x: 2, y: 20 }, released: { x: 2, y: 20 },
}
const edits = [{ pointer: '/families/knee/values/velocityGain', from: 5.6, to: 3.1 }]
const proposed: StartingValuesView = {
  kind: 'proposed', others: [],
  proposal: { joint: 'l1-knee', reaches: ['l1-knee', 'r3-knee'], edits, figures: figures(), findings: [], rules: [{ gain: 'K_pv', value: 3.1, unit: 'A·s/rad', rule: 'symmetric optimum', source: 'Kessler 1958 (from memory)' }] },
}
const change = aChange()
const replies = {
  'GET /changes/dunlin-47': { body: change },
  'GET /changes/dunlin-47/check': { body: aCheck() },
  'GET /changes/dunlin-47/check/joints/l1-knee': { body: report },
  'POST /changes/dunlin-47/check/map': { body: map },
  'POST /changes/dunlin-47/check/starting-values': { body: proposed },
  'PATCH /changes/dunlin-47/values': { body: { ...change, revision: change.revision + 1 } },
}
const ready = () => open('/changes/dunlin-47/check?joint=l1-knee')

describe('the full report of a joint', () => {
  it('lists the corners worst first, in percent of nominal, with the margin before and after', async () => {
    anApi(mirela, replies)
    ready()
    const table = await screen.findByRole('table', { name: 'corners of the tolerances' })
    const [first, second] = [...table.querySelectorAll('tbody tr')].map((r) => r.textContent)
    expect(first).toMatch(/105\+7velocity40\.09\.1.*6\.5/)
    expect(second).toMatch(/15−7velocity40\.010\.9.*8\.3/)
    expect(screen.getByText('1 of 2 corners outside policy')).toBeTruthy()
  })

  it('says what failed when the report cannot be read', async () => {
    anApi(mirela, { ...replies, 'GET /changes/dunlin-47/check/joints/l1-knee': refusal(422, 'content-invalid', 'l1-knee could not be read.') })
    ready()
    expect((await screen.findByRole('alert')).textContent).toContain('l1-knee could not be read.')
  })

  it('tries a cell of the map in the draft, from what stood there', async () => {
    const api = anApi(mirela, replies)
    ready()
    const drawn = await screen.findByRole('group', { name: /Stability map/ })
    fireEvent.keyDown(drawn, { key: 'ArrowRight' })
    fireEvent.keyDown(drawn, { key: 'ArrowRight' })
    fireEvent.keyDown(drawn, { key: 'Enter' })
    await waitFor(() => expect(api.acts().some((a) => a.method === 'PATCH')).toBe(true))
    const sent = api.acts().find((a) => a.method === 'PATCH')!.body as { edits: { pointer: string; from?: unknown; to: unknown }[] }
    expect(sent.edits.map((e) => [e.pointer, e.to])).toEqual([['/families/knee/values/velocityGain', 4], ['/families/knee/values/velocityIntegralGain', 20]])
    expect(sent.edits[0].from).toEqual(change.set.families.knee.values.velocityGain)
  })

  it('tries nothing where the change may not be edited, and says why', async () => {
    const api = anApi(mirela, { ...replies, 'GET /changes/dunlin-47': { body: { ...change, may: { ...change.may, edit: { allowed: false, why: 'Tobias Oyelaran is the author.' } } } } })
    ready()
    fireEvent.keyDown(await screen.findByRole('group', { name: /Stability map/ }), { key: 'ArrowRight' })
    fireEvent.keyDown(screen.getByRole('group', { name: /Stability map/ }), { key: 'Enter' })
    expect(screen.getByText('Tobias Oyelaran is the author.')).toBeTruthy()
    expect(api.acts().filter((a) => a.method === 'PATCH')).toEqual([])
  })

  it('shows starting values as edits with their check and applies them only when told to', async () => {
    const api = anApi(mirela, replies)
    ready()
    fireEvent.click(await screen.findByRole('button', { name: 'Starting values' }))
    fireEvent.click(await screen.findByRole('button', { name: 'Propose' }))
    expect((await screen.findByRole('list', { name: 'edits' })).textContent).toMatch(/velocityGain.*5\.6.*3\.1/)
    expect(screen.getByText(/reach 1 other joint too/)).toBeTruthy()
    expect(api.acts().filter((a) => a.method === 'PATCH')).toEqual([])
    fireEvent.click(screen.getByRole('button', { name: 'Put into the draft' }))
    await waitFor(() => expect(api.acts().find((a) => a.method === 'PATCH')?.body).toEqual({ edits }))
  })
})
