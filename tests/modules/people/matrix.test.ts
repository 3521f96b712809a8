import { describe, expect, it } from 'vitest'
import { acts, matrix, may, type Act, type HeldRole } from '../../../server/modules/people/permissions.ts'
import { roles, signingRoles, type Role } from '../../../shared/contract/people.ts'

/** The table "Who may do what" of the product's description, written out again: x holds, . does not. Columns in the order of `columns`. */
const columns: readonly Role[] = ['observer', 'controls engineer', 'peer reviewer', 'release manager', 'builder', 'administrator']
const table: Record<Act, string> = {
  read: 'x x x x x x',
  'draft changes': '. x . . . .',
  'draft firmware': '. x . . . .',
  'upload evidence': '. x . . . .',
  comment: '. x x x x .',
  'return changes': '. . x x . .',
  'sign peer review': '. . x . . .',
  'sign release': '. . . x . .',
  withdraw: '. . . x . .',
  'publish firmware': '. . . x . .',
  'sign policy': '. . . x . .',
  download: '. x . x x .',
  'record flashes': '. x . x x .',
  'make machines': '. . . . . x',
  'propose policy': '. . . . . x',
  'keep people': '. . . . . x',
  'keep mail': '. . . . . x',
  'keep keys': '. . . . . x',
  'keep backups': '. . . . . x',
}
const cell = (act: Act, role: Role) => table[act].split(' ')[columns.indexOf(role)] === 'x'

/** Acts on what belongs to no one machine, open to a role on any machine. */
const anywhere: readonly Act[] = ['read', 'draft firmware', 'publish firmware']

const held = (role: Role, machine: string | null, confirmed = true): HeldRole => ({ role, machine, confirmed })
const cells = acts.flatMap((act) => columns.map((role) => [role, act, cell(act, role)] as const))

describe('the permission matrix', () => {
  it('has a row for every act and a column for every role', () => {
    expect(Object.keys(table).sort()).toEqual([...acts].sort())
    expect([...columns].sort()).toEqual([...roles].sort())
    expect(cells).toHaveLength(acts.length * 6)
    for (const act of acts) expect(table[act].split(' ')).toHaveLength(6)
  })

  it.each(cells)('%s, %s: %s', (role, act, holds) => {
    // on the machine that is asked for, on all machines: as the table says; on another machine: never
    expect(may([held(role, 'dunlin')], act, 'dunlin').allowed).toBe(holds)
    expect(may([held(role, null)], act, 'dunlin').allowed).toBe(holds)
    expect(may([held(role, 'teasel')], act, 'dunlin').allowed).toBe(false)
    // what belongs to no machine
    expect(may([held(role, null)], act, null).allowed).toBe(holds)
    expect(may([held(role, 'teasel')], act, null).allowed).toBe(holds && anywhere.includes(act))
  })

  it.each(acts)('says who may: %s', (act) => {
    const answer = may([], act, 'dunlin')
    expect(answer.allowed).toBe(false)
    for (const role of columns) expect(!answer.allowed && answer.why.includes(role)).toBe(cell(act, role))
    expect(!answer.allowed && answer.why).toContain('dunlin')
  })

  it('adds up the roles of a person who holds several', () => {
    for (const a of columns)
      for (const b of columns)
        for (const act of acts) expect(may([held(a, 'dunlin'), held(b, null)], act, 'dunlin').allowed).toBe(cell(act, a) || cell(act, b))
  })

  const signing: readonly Act[] = ['sign peer review', 'sign release', 'publish firmware', 'sign policy']
  it.each(acts)('asks for a confirmed role to sign, and for nothing else: %s', (act) => {
    for (const role of columns.filter((r) => cell(act, r))) expect(may([held(role, 'dunlin', false)], act, 'dunlin').allowed).toBe(!signing.includes(act))
  })

  it('lets a role confirmed on another machine confirm nothing here', () => {
    expect(may([held('peer reviewer', 'dunlin', false), held('peer reviewer', 'teasel')], 'sign peer review', 'dunlin').allowed).toBe(false)
  })

  it('gives an administrator no signing act', () => {
    for (const act of signing) expect(cell(act, 'administrator')).toBe(false)
    expect(signingRoles).toEqual(['peer reviewer', 'release manager'])
    expect(Object.keys(matrix)).toEqual(acts)
  })
})
