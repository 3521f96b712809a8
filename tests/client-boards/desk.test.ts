import { describe, expect, it } from 'vitest'
import type { ChangeSummary } from '../../shared/contract/changes.ts'
import { waitingFor } from '../../src/features/changes/waiting-for.ts'

const change = (number: number, over: Partial<ChangeSummary> = {}): ChangeSummary => ({
  key: `dunlin-${number}`, machine: 'dunlin', machineName: 'Dunlin', number, title: `Change ${number}`, state: 'draft', life: over.state ?? 'draft', author: 'Mirela Castanho', writers: ['Mirela Castanho'], baseVersion: '1.4.0', alteredAt: `2026-03-${String(30 - number).padStart(2, '0')}T09:00:00Z`, ...over,
})
const changes = [
  change(1, { state: 'submitted' }), change(2, { state: 'submitted' }), change(3, { state: 'approved' }), change(4, { life: 'returned' }), change(5), change(6),
  change(7, { state: 'submitted', author: 'Rafiq Sandoval', writers: ['Rafiq Sandoval'] }), change(8, { state: 'released' }), change(9, { state: 'submitted', machine: 'teasel' }),
]
const keys = (list: readonly ChangeSummary[]) => list.map((c) => c.number)
const holding = (acts: Record<string, string[]>) => (act: string, machine: string) => acts[machine]?.includes(act) ?? false

describe('what waits for whom among the changes, oldest first', () => {
  it('is for a peer reviewer what others submitted on their machines', () => {
    const { toSign, toRelease } = waitingFor(changes, 'Rafiq Sandoval', holding({ dunlin: ['sign peer review'] }))
    expect([keys(toSign), keys(toRelease)]).toEqual([[2, 1], []])
  })

  it('is for a release manager what was approved', () => {
    const { toSign, toRelease } = waitingFor(changes, 'Hedda Lindqvist', holding({ dunlin: ['sign release'] }))
    expect([keys(toSign), keys(toRelease)]).toEqual([[], [3]])
  })

  it('is for an author what came back, their drafts, and what is on its way', () => {
    const { toSign, returned, drafts, away } = waitingFor(changes, 'Mirela Castanho', holding({ dunlin: ['draft changes', 'sign peer review'] }))
    expect([keys(returned), keys(drafts), keys(away)]).toEqual([[4], [6, 5], [9, 3, 2, 1]])
    // nobody is asked to sign what they wrote
    expect(keys(toSign)).toEqual([7])
  })

  it('is nothing for an observer', () => {
    expect(Object.values(waitingFor(changes, 'Yuna Brandt', () => false)).flat()).toEqual([])
  })
})
