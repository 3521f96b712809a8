// @vitest-environment jsdom
import '../components/setup-dom.ts'
import { fireEvent, screen, waitFor, within } from '@testing-library/react'
import { describe, expect, it } from 'vitest'
import type { ChangeView } from '../../shared/contract/changes.ts'
import { statements, type DiffRow, type DiffView, type EffectsView } from '../../shared/contract/reviews.ts'
import type { Me } from '../../shared/contract/people.ts'
import { content } from '../../src/features/reviews/components/other-changes.tsx'
import { hunksOf, linesBetween } from '../../src/features/reviews/components/text-diff.tsx'
import { isLower, stepBetween } from '../../src/features/reviews/version-step.ts'
import { aChange } from './a-change.ts'
import { aCheck, finding } from './a-check.ts'
import { address, anApi, mirela, open, rafiq, refusal } from './a-desk.tsx'

const hash = '030d58033f5424db43a43bb81897'.padEnd(64, '0')
const gain = (before: string, after: string, origin: 'joint' | 'family' = 'family'): DiffRow => ({
  key: `value:${origin}:velocityGain`, hash: 'd'.repeat(64), pointer: '/families/knee/values/velocityGain', parameter: 'velocityGain', title: 'Velocity gain', unit: 'A·s/rad', role: 'velocity.kp', register: { address: 0x24, encoding: 'q7.24' },
  before: { value: before, origin, bytes: '33 33 33 03', number: Number(before) }, after: { value: after, origin: 'family', bytes: '9A 99 99 05', number: Number(after) }, changePercent: (Number(after) / Number(before) - 1) * 100,
})
const limit: DiffRow = { key: 'value:knee:currentLimit', hash: 'e'.repeat(64), pointer: '/families/knee/values/currentLimit', parameter: 'currentLimit', title: 'Current limit', unit: 'A', role: 'current.limit', register: { address: 0x38, encoding: 'u16' }, before: { value: '2.8', origin: 'family', bytes: 'F0 0A', number: 2.8 }, after: { value: '3.2', origin: 'family', bytes: '80 0C', number: 3.2 }, changePercent: 14.2857 }
const diff: DiffView = {
  groups: [{ family: 'knee', joints: ['l1-knee', 'r3-knee'], rows: [gain('3.2', '5.6'), limit], own: [{ joint: 'r3-knee', rows: [gain('2.9', '5.6', 'joint')] }] }],
  joints: [{ key: 'joint:l4-knee', hash: 'f'.repeat(64), pointer: '/joints/l4-knee', joint: 'l4-knee', is: 'removed' }],
  driveTrains: [{ family: 'knee', rows: [{ key: 'drive:knee:J_load', hash: 'a'.repeat(64), pointer: '/families/knee/driveTrain/J_load', field: 'J_load', before: '{"value":0.0185,"low":0.013,"high":0.03}', after: '0.02' }] }], families: [], buses: [], counts: { values: 4, joints: 2, rows: 5 }, textBefore: '{\n  "a": 1\n}\n', textAfter: '{\n  "a": 2\n}\n',
}

const rowKeys = [...diff.groups.flatMap((g) => [...g.rows, ...g.own.flatMap((o) => o.rows)]), ...diff.joints, ...diff.driveTrains.flatMap((d) => d.rows)].map((r) => r.key)
const effects: EffectsView = {
  effects: [{ row: limit.key, kind: 'effect', effect: { figure: 'torque at the clamp', loop: null, unit: 'N·m', joint: 'l1-knee', before: 5.7, after: 6.51, beforeReads: '', afterReads: '', verdict: 'stable', policy: null } }],
  progress: { done: 1, total: 1, state: 'done', problem: '' },
}

const yes = { allowed: true } as const
const no = (why: string) => ({ allowed: false, why }) as const

function aReview({ me = rafiq, change = {}, may = {}, check = aCheck(), reads = rowKeys, mark = true }: { me?: Me; change?: Partial<ChangeView>; may?: Partial<ChangeView['may']>; check?: ReturnType<typeof aCheck>; reads?: string[]; mark?: boolean } = {}) {
  const base = aChange()
  const view: ChangeView = {
    ...base, state: 'submitted', life: 'submitted', revision: 9, contentHash: hash,
    events: [...base.events, { kind: 'submitted', person: 'Mirela Castanho', at: '2026-11-29T17:24:00Z', note: '' }],
    ...change, may: { ...base.may, edit: no('The change is submitted.'), submit: no('The change is submitted.'), return: yes, signPeerReview: yes, release: no('The change is submitted.'), bringUpToDate: no('It is on the newest release already.'), ...may },
  }
  return anApi(me, {
    'GET /changes/dunlin-47': () => ({ body: view }),
    'GET /changes/dunlin-47/check': { body: check },
    'GET /changes/dunlin-47/diff': { body: diff },
    'GET /changes/dunlin-47/reading': { body: { read: reads, rows: diff.counts.rows, people: [{ name: 'Ingunn Veblen', read: 2 }], may: { mark: mark ? yes : no('You wrote in this change.') } } },
    'GET /changes/dunlin-47/effects': { body: effects },
    'GET /changes/dunlin-47/version': { body: { version: '1.8.0', step: 'minor', because: ['current limit alters'] } },
  })
}

describe('what alters', () => {
  it('shows joints that alter alike together, and alone what one of them gives up', async () => {
    aReview()
    open('/changes/dunlin-47/review')
    const table = await screen.findByRole('table', { name: 'what alters in the Knee family' })
    expect(within(table).getByText('velocity law')).toBeTruthy()
    const [row, own] = within(table).getAllByRole('row', { name: /Velocity gain/ })
    expect(row.textContent).toContain('3.2')
    expect(row.textContent).toContain('+75.0')
    expect(row.textContent).toContain('0x24')
    expect(row.textContent).toContain('9A 99 99 05')
    expect(row.textContent).toContain('4 of 4 bytes changed')
    expect(within(table).getByText('R3 knee gives up its own value')).toBeTruthy()
    expect(own.textContent).toContain('2.9')
    expect(screen.getByText('L1 knee, R3 knee', { selector: '.aux' })).toBeTruthy()
    expect(screen.getByText('l4-knee is removed.')).toBeTruthy()
    expect(screen.getByRole('table', { name: 'drive train of the Knee family' }).textContent).toContain('0.0185 (0.013 to 0.03)')
  })

  it('compares as text on demand', async () => {
    aReview()
    open('/changes/dunlin-47/review')
    fireEvent.click(await screen.findByRole('button', { name: 'Compare as text' }))
    expect(await screen.findByText('taken away:')).toBeTruthy()
    expect(await screen.findByText('added:')).toBeTruthy()
  })

  it('shows what the values do all together', async () => {
    aReview()
    open('/changes/dunlin-47/review')
    await screen.findByText('All together')
    expect(screen.getByText('velocity phase margin').parentElement!.textContent).toMatch(/55\.3.*46\.4/)
  })
})

describe('reading', () => {
  it('holds the signature until every row is marked, row by row or a family at once', async () => {
    const { acts, table } = aReview({ reads: [] })
    table['POST /changes/dunlin-47/reading'] = { body: { read: [limit.key], rows: 5, people: [], may: { mark: yes } } }
    open('/changes/dunlin-47/review')
    expect(await screen.findByText('0 of 5 rows read')).toBeTruthy()
    expect(screen.getByText('Ingunn Veblen has read 2')).toBeTruthy()
    const sign = screen.getByRole('button', { name: 'Sign the peer review' })
    expect(sign.getAttribute('aria-description')).toBe('Mark every row as read first: 5 of 5 are open.')
    fireEvent.click(screen.getAllByRole('checkbox', { name: 'Current limit is read' })[0])
    await waitFor(() => expect(acts()).toMatchObject([{ method: 'POST', path: '/changes/dunlin-47/reading', body: { rows: [{ key: limit.key, hash: limit.hash }] } }]))
    await screen.findByText('1 of 5 rows read')
    fireEvent.click(screen.getByRole('button', { name: /mark 2 as read/ }))
    await waitFor(() => expect((acts()[1].body as { rows: unknown[] }).rows).toHaveLength(2))
  })

  it('takes a mark off again', async () => {
    const { acts, table } = aReview()
    table[`DELETE /changes/dunlin-47/reading/${encodeURIComponent(limit.key)}`] = { body: { read: [], rows: 5, people: [], may: { mark: yes } } }
    open('/changes/dunlin-47/review')
    await screen.findByText('5 of 5 rows read')
    fireEvent.click(screen.getAllByRole('checkbox', { name: 'Current limit is read' })[0])
    await waitFor(() => expect(acts()[0]?.method).toBe('DELETE'))
  })

  it('leads to the next unread row with a key', async () => {
    aReview({ reads: rowKeys.filter((k) => k !== limit.key) })
    open('/changes/dunlin-47/review')
    await screen.findByText('4 of 5 rows read')
    fireEvent.keyDown(document.body, { key: 'n' })
    expect(document.activeElement?.getAttribute('aria-label')).toBe('Current limit is read')
  })

  it('shows no marks to who does not read to sign', async () => {
    aReview({ me: mirela, mark: false, reads: [] })
    open('/changes/dunlin-47/review')
    await screen.findByRole('table', { name: 'what alters in the Knee family' })
    expect(screen.queryByRole('checkbox', { name: 'Current limit is read' })).toBeNull()
  })

  it('says beside each value what it does alone', async () => {
    aReview()
    open('/changes/dunlin-47/review')
    const table = await screen.findByRole('table', { name: 'what alters in the Knee family' })
    await waitFor(() => expect(within(table).getByRole('row', { name: /Current limit/ }).textContent).toMatch(/torque at the clamp.*5\.70.*6\.51/))
  })
})

describe('the peer review', () => {
  it('is signed with the statement made and the password entered, on the very content shown', async () => {
    const { acts, table } = aReview()
    table['POST /changes/dunlin-47/sign'] = { body: aChange({ state: 'approved', life: 'approved', revision: 10, contentHash: hash }) }
    open('/changes/dunlin-47/review')
    const sign = await screen.findByRole('button', { name: 'Sign the peer review' })
    expect(sign.getAttribute('aria-description')).toBe('State what you sign first.')
    fireEvent.click(screen.getByLabelText(statements['peer review']))
    expect(sign.getAttribute('aria-description')).toBe('Enter your password first.')
    fireEvent.change(screen.getByLabelText('Your password'), { target: { value: 'second look' } })
    fireEvent.submit(sign.closest('form')!)
    await waitFor(() => expect(acts()).toEqual([{ method: 'POST', path: '/changes/dunlin-47/sign', body: { password: 'second look', contentHash: hash }, ifMatch: '"9"' }]))
  })

  it('shows a wrong password beside its field and lets go of it', async () => {
    const { table } = aReview()
    table['POST /changes/dunlin-47/sign'] = refusal(403, 'wrong-password', 'The password is not yours.', { errors: [{ pointer: '/password', detail: 'is not the password you sign in with' }] })
    open('/changes/dunlin-47/review')
    fireEvent.click(await screen.findByLabelText(statements['peer review']))
    fireEvent.change(screen.getByLabelText('Your password'), { target: { value: 'wrong' } })
    fireEvent.submit(screen.getByRole('button', { name: 'Sign the peer review' }).closest('form')!)
    await screen.findByText('is not the password you sign in with')
    expect((screen.getByLabelText('Your password') as HTMLInputElement).value).toBe('')
  })

  it("gives the author the server's reason instead of a form", async () => {
    aReview({ me: mirela, may: { signPeerReview: no('You wrote in this change; two other people sign it.'), return: no('You wrote in this change.') } })
    open('/changes/dunlin-47/review')
    await screen.findByText('You wrote in this change; two other people sign it.')
    expect(screen.queryByRole('button', { name: 'Sign the peer review' })).toBeNull()
    expect(screen.queryByRole('button', { name: 'Return…' })).toBeNull()
  })

  it('shows what is signed: hash, values, joints, verdict, findings, concessions', async () => {
    aReview({ check: aCheck({ findings: [finding()] }) })
    open('/changes/dunlin-47/review')
    const panel = await screen.findByRole('region', { name: 'signatures' })
    await within(panel).findByText('4 values on 2 joints')
    expect(within(panel).getByTitle(hash)).toBeTruthy()
    expect(panel.textContent).toContain('1 concession needed')
  })

  it('shows void signatures apart', async () => {
    aReview({ change: { signatures: [{ meaning: 'peer review', statement: 'I stood by it.', person: 'Ingunn Veblen', at: '2026-11-28T09:00:00Z', contentHash: 'x', void: true }] } })
    open('/changes/dunlin-47/review')
    expect(await screen.findByText('Void: the content or its check is no longer what was signed.')).toBeTruthy()
    expect(screen.getByText('Ingunn Veblen').className).toContain('line-through')
  })
})

describe('the release', () => {
  const approved = { change: { state: 'approved' as const, life: 'approved' as const }, may: { signPeerReview: no('The change is approved.'), release: yes } }
  const made = { body: { machine: 'dunlin', version: '1.8.0' } }
  const fill = async (version: string) => {
    const field = (await screen.findByLabelText('Version of Dunlin')) as HTMLInputElement
    expect(field.value).toBe('1.8.0')
    fireEvent.change(field, { target: { value: version } })
    fireEvent.click(screen.getByLabelText(statements.release))
    fireEvent.change(screen.getByLabelText('Your password'), { target: { value: 'last word' } })
    return screen.getByRole('button', { name: `Sign and release ${version}` })
  }

  it('proposes the version and releases it', async () => {
    const { acts, table } = aReview(approved)
    table['POST /changes/dunlin-47/release'] = made
    open('/changes/dunlin-47/review')
    fireEvent.submit((await fill('1.8.0')).closest('form')!)
    await waitFor(() => expect(acts()[0]).toMatchObject({ path: '/changes/dunlin-47/release', body: { password: 'last word', contentHash: hash, version: '1.8.0' }, ifMatch: '"9"' }))
    await waitFor(() => expect(address()).toBe('/machines/dunlin/releases/1.8.0'))
  })

  it('asks a reason for a lower step', async () => {
    const { acts, table } = aReview(approved)
    table['POST /changes/dunlin-47/release'] = made
    open('/changes/dunlin-47/review')
    const sign = await fill('1.7.1')
    expect(sign.getAttribute('aria-description')).toBe('A patch step needs a reason: minor is proposed.')
    fireEvent.change(screen.getByLabelText('Reason for a patch step'), { target: { value: 'The limit was 3.2 before.' } })
    fireEvent.submit(sign.closest('form')!)
    await waitFor(() => expect(acts()[0].body).toMatchObject({ version: '1.7.1', stepReason: 'The limit was 3.2 before.' }))
  })

  it('refuses a version that is none, or not later', async () => {
    aReview(approved)
    open('/changes/dunlin-47/review')
    expect((await fill('1.8')).getAttribute('aria-description')).toBe('A version has the form 1.2.3.')
    fireEvent.change(screen.getByLabelText('Version of Dunlin'), { target: { value: '1.6.9' } })
    expect(screen.getByText('It must come after 1.7.0.')).toBeTruthy()
  })
})

describe('returning', () => {
  it('needs a reason', async () => {
    const { acts, table } = aReview()
    table['POST /changes/dunlin-47/return'] = { body: aChange({ revision: 10, life: 'returned' }) }
    open('/changes/dunlin-47/review')
    fireEvent.click(await screen.findByRole('button', { name: 'Return…' }))
    const dialog = screen.getByRole('dialog')
    fireEvent.click(within(dialog).getByRole('button', { name: 'Return it' }))
    expect(within(dialog).getByText('Say what is to be altered.')).toBeTruthy()
    fireEvent.change(within(dialog).getByLabelText('Reason'), { target: { value: 'Log of the wet rope, please.' } })
    fireEvent.click(within(dialog).getByRole('button', { name: 'Return it' }))
    await waitFor(() => expect(acts()[0]).toMatchObject({ path: '/changes/dunlin-47/return', body: { reason: 'Log of the wet rope, please.' } }))
    await waitFor(() => expect(screen.queryByRole('dialog')).toBeNull())
  })
})

describe('pure parts', () => {
  it.each([['1.7.0', '1.7.1', 'patch'], ['1.7.0', '1.8.0', 'minor'], ['1.7.0', '2.0.0', 'major'], ['1.7.0', '1.7.0', null], ['1.7.0', '1.6.9', null], ['1.9.0', '1.10.0', 'minor']])('%s to %s is a %s step', (a, b, step) => expect(stepBetween(a, b)).toBe(step))
  it('orders steps', () => expect([isLower('patch', 'minor'), isLower('minor', 'minor'), isLower('major', 'minor')]).toEqual([true, false, false]))
  it.each([[null, 'none'], ['"name"', 'name'], ['aft', 'aft'], ['1500', '1\u00a0500'], ['[]', 'none'], ['[{"address":80,"name":"supply watch"}]', 'supply watch']])('shows stored content %s as %s', (text, shown) => expect(content(text)).toBe(shown))

  it('numbers the lines of two texts and folds what is equal', () => {
    const before = Array.from({ length: 20 }, (_, i) => `line ${i}`).join('\n')
    const after = before.replace('line 10', 'line ten')
    const lines = linesBetween(before, after)
    expect(lines.filter((l) => l.kind !== 'same')).toEqual([{ kind: 'gone', text: 'line 10', before: 11, after: null }, { kind: 'new', text: 'line ten', before: null, after: 11 }])
    const { hunks, rest } = hunksOf(lines)
    expect(hunks).toHaveLength(1)
    expect([hunks[0].skipped.length, hunks[0].lines.length, rest.length]).toEqual([7, 8, 6])
  })
})
