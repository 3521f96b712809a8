import { describe, expect, it } from 'vitest'
import { fold, type RawFinding } from '../../../server/modules/checks/findings/finding.ts'

const raw = (edit: Partial<RawFinding>): RawFinding => ({ place: 'knee', kind: 'phase margin', level: 'pass', value: 50, limit: 45, unit: '°', text: 'x.', remedy: '', source: 's', ...edit })

describe('folding findings', () => {
  it('makes one of each kind, loop and place, with a key that values do not move', () => {
    const first = fold([raw({ joint: 'l1', loop: 'velocity' }), raw({ joint: 'r1', loop: 'velocity' }), raw({ joint: 'l1', loop: 'position' }), raw({ place: 'hip', joint: 'h1', loop: 'velocity' })])
    expect(first.map((f) => [f.key, f.joints])).toEqual([['phase margin/position/knee', ['l1']], ['phase margin/velocity/hip', ['h1']], ['phase margin/velocity/knee', ['l1', 'r1']]])
    expect(fold([raw({ joint: 'l1', loop: 'velocity', value: 46 })])[0].key).toBe('phase margin/velocity/knee')
  })

  it('lets the gravest level speak, for the joints it holds for, by the one that misses most', () => {
    const [f] = fold([raw({ joint: 'a', level: 'concession needed', value: 44 }), raw({ joint: 'b' }), raw({ joint: 'c', level: 'concession needed', value: 40 })])
    expect(f).toMatchObject({ level: 'concession needed', joints: ['a', 'c'], value: 40 })
  })

  it('of passes shows the one nearest to its limit', () => expect(fold([raw({ joint: 'a', value: 80 }), raw({ joint: 'b', value: 46 })])[0].value).toBe(46))
  it('puts the gravest first', () => expect(fold([raw({ kind: 'a' }), raw({ kind: 'b', level: 'block' }), raw({ kind: 'c', level: 'advise' })]).map((f) => f.level)).toEqual(['block', 'advise', 'pass']))
  it('does not depend on the order it is given', () => {
    const list = [raw({ joint: 'a', value: 47 }), raw({ joint: 'b', kind: 'x', level: 'block' }), raw({ joint: 'c', loop: 'current' })]
    expect(fold(list.toReversed())).toEqual(fold(list))
  })
})
