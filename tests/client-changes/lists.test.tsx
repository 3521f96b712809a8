// @vitest-environment jsdom
import '../components/setup-dom.ts'
import { fireEvent, screen, waitFor, within } from '@testing-library/react'
import { describe, expect, it, vi } from 'vitest'
import type { ChangeSummary } from '../../shared/contract/changes.ts'
import type { ReleaseSummary, ReleaseView } from '../../shared/contract/releases.ts'
import { railOf } from '../../src/features/changes/rail-of.ts'
import { aChange, rawSchemas } from './a-change.ts'
import { aCheck } from './a-check.ts'
import { address, anApi, mirela, open, rafiq, refusal } from './a-desk.tsx'

const summary = (number: number, title: string, over: Partial<ChangeSummary> = {}): ChangeSummary => ({
  key: `dunlin-${number}`, machine: 'dunlin', machineName: 'Dunlin', number, title, state: 'draft', life: 'draft', author: 'Mirela Castanho', writers: ['Mirela Castanho'], baseVersion: '1.7.0', alteredAt: '2026-11-28T09:00:00Z', ...over,
})
const changes: ChangeSummary[] = [
  summary(51, 'Longer hip reach', { state: 'submitted', life: 'submitted', author: 'Tobias Oyelaran', writers: ['Tobias Oyelaran'], alteredAt: '2026-11-30T09:00:00Z' }),
  summary(50, 'Stiffer hip', { state: 'submitted', life: 'signature void', alteredAt: '2026-11-29T09:00:00Z' }),
  summary(47, 'Stiffer knee', { state: 'approved', life: 'approved' }),
  summary(49, 'Quieter yaw', { life: 'returned' }),
  summary(52, 'Winch current'),
  summary(44, 'Knee current limit', { state: 'released', life: 'released' }),
  summary(18, 'Faster wrist', { key: 'teasel-18', machine: 'teasel', machineName: 'Teasel', state: 'submitted', life: 'submitted', author: 'Rafiq Sandoval', writers: ['Rafiq Sandoval'] }),
]
const checks = Object.fromEntries(changes.map((c) => [`GET /changes/${c.key}/check`, { body: aCheck() }]))

describe('the desk', () => {
  const group = (name: string) => within(screen.getByRole('heading', { name }).closest('section')!).getAllByRole('listitem').map((li) => within(li).getByRole('heading').textContent)

  it('shows a signer what others wrote, longest waiting first, and never their own', async () => {
    anApi(rafiq, { 'GET /changes': { body: changes }, ...checks })
    open('/')
    await screen.findByText('Rafiq, three things wait for you')
    expect(group('To read and sign')).toEqual(['50Stiffer hip', '51Longer hip reach'])
    expect(group('To release')).toEqual(['47Stiffer knee'])
    expect(screen.getAllByRole('link', { name: 'Read and release: Stiffer knee' })[0].getAttribute('href')).toBe('/changes/dunlin-47/review')
    expect((await screen.findAllByText('velocity phase', { exact: false }))[0].parentElement!.textContent).toMatch(/55\.3.*46\.4/)
  })

  it('shows an engineer their drafts and what came back', async () => {
    anApi(mirela, { 'GET /changes': { body: changes }, ...checks })
    open('/')
    await screen.findByText('Mirela, one thing waits for you')
    expect(group('Returned to you')).toEqual(['49Quieter yaw'])
    expect(group('Your drafts')).toEqual(['52Winch current'])
    expect(screen.queryByRole('heading', { name: 'To read and sign' })).toBeNull()
    expect(screen.getByRole('heading', { name: 'Yours, on their way' })).toBeTruthy()
  })

  it('says what to do when there is nothing', async () => {
    anApi(rafiq, { 'GET /changes': { body: [summary(44, 'Knee', { state: 'released', life: 'released' })] } })
    open('/')
    expect(await screen.findByText('Nothing waits for you')).toBeTruthy()
  })

  it('says what failed', async () => {
    anApi(rafiq, { 'GET /changes': refusal(500, 'unexpected', 'This failed inside Detent.') })
    open('/')
    expect(await screen.findByText('This failed inside Detent.')).toBeTruthy()
  })
})

describe('the list of changes', () => {
  const titles = async () => within(await screen.findByRole('table', { name: 'changes' })).getAllByRole('link').map((a) => a.textContent)

  it('keeps its filters in the address', async () => {
    anApi(mirela, { 'GET /changes': { body: changes } })
    open('/changes?machine=dunlin&state=submitted')
    expect(await titles()).toEqual(['51Longer hip reach', '50Stiffer hip'])
    fireEvent.change(screen.getByLabelText('State'), { target: { value: 'signature void' } })
    expect(await titles()).toEqual(['50Stiffer hip'])
    expect(address()).toBe('/changes?machine=dunlin&state=signature+void')
    fireEvent.change(screen.getByLabelText('filter the changes'), { target: { value: 'wrist' } })
    expect(screen.getAllByText('No change fits this filter.').length).toBeGreaterThan(0)
  })

  it('leads a draft to its values and the rest to their review', async () => {
    anApi(mirela, { 'GET /changes': { body: changes } })
    open('/changes')
    const table = await screen.findByRole('table', { name: 'changes' })
    expect(within(table).getByRole('link', { name: /Winch current/ }).getAttribute('href')).toBe('/changes/dunlin-52')
    expect(within(table).getByRole('link', { name: /Knee current limit/ }).getAttribute('href')).toBe('/changes/dunlin-44/review')
  })

  it('drafts a change and goes to it; what the server refuses stays in the dialog', async () => {
    const { acts, table } = anApi(mirela, { 'GET /changes': { body: changes } })
    table['POST /changes'] = refusal(403, 'not-permitted', 'This takes the role controls engineer on dunlin.')
    open('/changes?machine=dunlin')
    fireEvent.click(await screen.findByRole('button', { name: 'Draft a change…' }))
    const dialog = screen.getByRole('dialog')
    fireEvent.click(within(dialog).getByRole('button', { name: 'Draft it' }))
    expect(within(dialog).getByText('A change needs a title.')).toBeTruthy()
    fireEvent.change(within(dialog).getByLabelText('Title'), { target: { value: 'Softer ankle' } })
    fireEvent.click(within(dialog).getByRole('button', { name: 'Draft it' }))
    await within(dialog).findByText('This takes the role controls engineer on dunlin.')
    expect((within(dialog).getByLabelText('Title') as HTMLInputElement).value).toBe('Softer ankle')
    table['POST /changes'] = { status: 201, body: { key: 'dunlin-53' } }
    table['GET /changes/dunlin-53'] = { body: aChange({ key: 'dunlin-53', number: 53, title: 'Softer ankle' }) }
    table['GET /changes/dunlin-53/check'] = { body: aCheck() }
    table['GET /changes/dunlin-53/schemas'] = { body: rawSchemas }
    table['GET /changes/dunlin-53/version'] = { body: { version: '1.7.1', step: 'patch', because: [] } }
    fireEvent.click(within(dialog).getByRole('button', { name: 'Draft it' }))
    await waitFor(() => expect(address()).toBe('/changes/dunlin-53'))
    expect(acts()[0].body).toEqual({ machine: 'dunlin', title: 'Softer ankle', reason: '' })
  })

  it('is not offered to who drafts nothing', async () => {
    anApi(rafiq, { 'GET /changes': { body: changes } })
    open('/changes')
    await screen.findByRole('table', { name: 'changes' })
    expect(screen.queryByRole('button', { name: 'Draft a change…' })).toBeNull()
  })
})

describe('the rail of a change', () => {
  const at = (kind: 'drafted' | 'submitted' | 'approved' | 'returned' | 'signature void' | 'cancelled', person: string | null, hour: number) => ({ kind, person, at: `2026-11-28T${String(hour).padStart(2, '0')}:00:00Z`, note: '' })

  it('strikes the notch a change was knocked out of', () => {
    const rail = railOf(aChange({ life: 'returned', events: [at('drafted', 'M', 9), at('submitted', 'M', 10), at('returned', 'H', 11)], signatures: [] }))
    expect(rail).toMatchObject({ at: 'draft', struck: { place: 'submitted', word: 'returned', who: 'H' }, peerReview: 'open' })
  })
  it('marks a void signature', () => {
    const signature = { meaning: 'peer review' as const, statement: '', person: 'R', at: '', contentHash: '', void: true }
    const rail = railOf(aChange({ state: 'submitted', life: 'signature void', events: [at('drafted', 'M', 9), at('submitted', 'M', 10), at('approved', 'R', 11), at('signature void', null, 12)], signatures: [signature] }))
    expect(rail).toMatchObject({ at: 'submitted', struck: { place: 'approved', word: 'void', who: 'Detent' }, peerReview: 'void' })
  })
  it('leaves a cancelled change where it had come to', () => {
    expect(railOf(aChange({ state: 'cancelled', life: 'cancelled', events: [at('drafted', 'M', 9), at('submitted', 'M', 10), at('cancelled', 'M', 11)] }))).toMatchObject({ at: 'submitted', cancelled: { who: 'M' } })
  })
})

const release: ReleaseView = {
  machine: 'dunlin', machineName: 'Dunlin', version: '1.7.0', sequence: 9, state: 'current', title: 'Knee current limit', change: 'dunlin-47', releasedBy: 'Hedda Lindqvist', releasedAt: '2026-11-12T13:15:00Z', joints: 2,
  reason: 'The new gear train bears 6.6 N·m.', contentHash: 'c'.repeat(64), proposedStep: 'minor', step: 'patch', stepReason: 'It was so before.',
  signatures: [{ meaning: 'peer review', statement: 'I stand by it.', person: 'Rafiq Sandoval', at: '2026-11-11T09:30:00Z', contentHash: 'c', void: false }],
  concessions: [{ finding: 'k', characteristic: 'torque against gear', limit: '6.97 N·m', reason: 'The stop takes it.', until: '2027-03-01', count: null, used: null, state: 'holds' }],
  items: [
    { joint: 'l1-knee', name: 'L1 knee', family: 'Knee', bus: 'fore', address: 0x33, firmware: 'hinge 2.1.0', revision: 12, isNew: true, imageSha256: '92b3e4a4a5063de9'.padEnd(64, '0'), imageBytes: 128 },
    { joint: 'winch', name: 'winch', family: 'Winch', bus: 'aft', address: 0x40, firmware: 'capstan 1.3.0', revision: 4, isNew: false, imageSha256: 'd962711bfd21fb06'.padEnd(64, '0'), imageBytes: 192 },
  ],
  withdrawal: null, kit: null, firmwareImages: [], needsReason: false, unfit: [], may: { download: { allowed: true }, withdraw: { allowed: true } },
}
const releaseApi = (over: Partial<ReleaseView> = {}) => anApi(rafiq, { 'GET /machines/dunlin/releases/1.7.0': () => ({ body: { ...release, ...over } }), 'GET /changes/dunlin-47': { body: aChange({ state: 'released', life: 'released' }) } })

describe('a release', () => {
  it('is a sheet with every joint, its image hash and files, signatures, concessions and the reason for a lower step', async () => {
    releaseApi()
    open('/machines/dunlin/releases/1.7.0')
    const sheet = await screen.findByRole('article', { name: 'release sheet of Dunlin 1.7.0' })
    expect(sheet.textContent).toContain('Patch step, minor proposed: It was so before.')
    expect(sheet.textContent).toContain('1 revision is new (brass), 1 carried.')
    const row = within(sheet).getByRole('row', { name: /L1 knee/ })
    expect(row.textContent).toContain('0x33')
    expect(row.textContent).toContain('92b3 e4a4 a506 3de9')
    expect(within(row).getByRole('link', { name: 'download .bin of L1 knee' }).getAttribute('href')).toBe('/api/machines/dunlin/releases/1.7.0/joints/l1-knee/image.bin')
    expect(within(row).getByRole('link', { name: 'download .hex of L1 knee' })).toBeTruthy()
    expect(sheet.textContent).toContain('Rafiq Sandoval')
    expect(sheet.textContent).toContain('torque against gear')
    expect(screen.getByRole('note', { name: 'caution' })).toBeTruthy()
  })

  it('shows the whole hash of a chosen joint', async () => {
    releaseApi()
    open('/machines/dunlin/releases/1.7.0')
    const bench = await screen.findByRole('region', { name: 'for the bench' })
    fireEvent.change(within(bench).getByLabelText('Joint'), { target: { value: 'winch' } })
    expect(within(bench).getByTitle(release.items[1].imageSha256)).toBeTruthy()
  })

  it('offers the signed kit with the hash of its manifest', async () => {
    releaseApi({ kit: { manifestSha256: '7'.repeat(64), keyId: 'k', bytes: 412_000 } })
    open('/machines/dunlin/releases/1.7.0')
    const bench = await screen.findByRole('region', { name: 'for the bench' })
    expect(within(bench).getByRole('button', { name: 'Download the kit, 2 joints' })).toBeTruthy()
    expect(within(bench).getByTitle('7'.repeat(64))).toBeTruthy()
    expect(bench.textContent).toContain('412 kB')
  })

  it('fetches a file, proves its bytes and says under which hash it was saved', async () => {
    const { table } = releaseApi()
    // SHA-256 of the seven bytes "[1,2,3]", by sha256sum of GNU coreutils.
    const sha256 = 'a615eeaee21de5179de080de8c3052c8da901138406ba71c38c032845f7d54f4'
    table['GET /machines/dunlin/releases/1.7.0/joints/l1-knee/image.bin'] = { body: [1, 2, 3], headers: { 'X-Detent-SHA256': sha256, 'Content-Disposition': 'attachment; filename="dunlin-1.7.0-l1-knee.bin"' } }
    vi.stubGlobal('URL', Object.assign(URL, { createObjectURL: () => 'blob:x', revokeObjectURL: () => {} }))
    const saved = vi.spyOn(HTMLAnchorElement.prototype, 'click').mockImplementation(() => {})
    open('/machines/dunlin/releases/1.7.0')
    fireEvent.click(await screen.findByRole('button', { name: 'Download Raw image of L1 knee' }))
    expect(await screen.findByText('dunlin-1.7.0-l1-knee.bin')).toBeTruthy()
    expect(screen.getByTitle(sha256)).toBeTruthy()
    table['GET /machines/dunlin/releases/1.7.0/joints/l1-knee/image.hex'] = { body: [1], headers: { 'X-Detent-SHA256': sha256 } }
    fireEvent.click(screen.getByRole('button', { name: 'Download Intel HEX of L1 knee' }))
    expect(await screen.findByText('The bytes arrived altered')).toBeTruthy()
    expect(saved).toHaveBeenCalledTimes(1)
    saved.mockRestore()
  })

  it('asks why a superseded release is needed, and hands the reason along', async () => {
    const { asked } = releaseApi({ state: 'superseded', needsReason: true })
    open('/machines/dunlin/releases/1.7.0')
    const take = await screen.findByRole('button', { name: 'Download Intel HEX of L1 knee' })
    expect(take.getAttribute('aria-description')).toBe('Write why you need a superseded release first.')
    expect(screen.queryByRole('link', { name: /download/ })).toBeNull()
    fireEvent.change(screen.getByLabelText('Why a superseded release is needed'), { target: { value: 'compare a bench log' } })
    fireEvent.click(take)
    await waitFor(() => expect(asked.at(-1)?.path).toBe('/machines/dunlin/releases/1.7.0/joints/l1-knee/image.hex?reason=compare+a+bench+log'))
  })

  it('gives the reason instead of files to who may not download', async () => {
    releaseApi({ state: 'withdrawn', withdrawal: { reason: 'Half rate.', by: 'Hedda Lindqvist', at: '2026-11-13T08:00:00Z' }, may: { download: { allowed: false, why: 'This release is withdrawn: it must not be flashed.' }, withdraw: { allowed: false, why: 'It is withdrawn already.' } } })
    open('/machines/dunlin/releases/1.7.0')
    expect(await screen.findByText('This release is withdrawn: it must not be flashed.')).toBeTruthy()
    expect(screen.getByText('“Half rate.”')).toBeTruthy()
    expect(screen.queryByRole('link', { name: /download/ })).toBeNull()
    expect(screen.queryByRole('button', { name: /Withdraw/ })).toBeNull()
  })

  it('is withdrawn with a reason and its name written again', async () => {
    const { acts, table } = releaseApi()
    table['POST /machines/dunlin/releases/1.7.0/withdraw'] = { body: {} }
    open('/machines/dunlin/releases/1.7.0')
    fireEvent.click(await screen.findByRole('button', { name: 'Withdraw 1.7.0…' }))
    const dialog = screen.getByRole('dialog', { name: 'Withdraw Dunlin 1.7.0' })
    const act = within(dialog).getByRole('button', { name: 'Withdraw' })
    fireEvent.change(within(dialog).getByLabelText('Reason'), { target: { value: 'Current task at half rate.' } })
    expect(act.getAttribute('aria-description')).toBe('Write "Dunlin 1.7.0" first.')
    fireEvent.change(within(dialog).getByLabelText('Write the name of the release'), { target: { value: 'Dunlin 1.7.0' } })
    fireEvent.click(act)
    await waitFor(() => expect(acts()).toMatchObject([{ path: '/machines/dunlin/releases/1.7.0/withdraw', body: { version: '1.7.0', reason: 'Current task at half rate.' } }]))
    await waitFor(() => expect(screen.queryByRole('dialog')).toBeNull())
  })
})

describe('the list of releases', () => {
  it('filters by state in the address', async () => {
    const list: ReleaseSummary[] = [release, { ...release, version: '1.6.2', state: 'withdrawn', sequence: 8 }]
    anApi(rafiq, { 'GET /releases': { body: list } })
    open('/releases?state=withdrawn')
    const table = await screen.findByRole('table', { name: 'releases' })
    expect(within(table).getAllByRole('link').map((a) => a.textContent)).toEqual(['Dunlin 1.6.2'])
  })
})
