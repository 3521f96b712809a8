// @vitest-environment jsdom
import '../components/setup-dom.ts'
import { fireEvent, screen, waitFor, within } from '@testing-library/react'
import { describe, expect, it } from 'vitest'
import { statements } from '../../shared/contract/reviews.ts'
import { aChange } from '../client-changes/a-change.ts'
import { aCheck, finding } from '../client-changes/a-check.ts'
import { address, mirela, open, refusal } from '../client-changes/a-desk.tsx'
import { aComment, aReview, commentsView, gain, hash, limit, no, yes } from './a-review.ts'


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
    expect(within(screen.getByRole('table', { name: 'Joints that come and go' })).getByText('removed')).toBeTruthy()
    expect(screen.getByRole('table', { name: 'Drive train of the Knee family' }).textContent).toContain('0.0185 (0.013 to 0.03)')
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
  const reading = (read: string[]) => ({ body: { read, rows: 5, people: [{ name: 'Rafiq Sandoval', read: read.length }], may: { mark: yes } } })

  it('holds the signature until every row is marked, row by row or a family at once', async () => {
    const { acts, table } = aReview({ reads: [] })
    table['POST /changes/dunlin-47/reading'] = reading([limit.key])
    open('/changes/dunlin-47/review')
    const line = await screen.findByRole('group', { name: 'reading' })
    expect(line.textContent).toContain('0 of 5 rows read')
    expect(line.textContent).toContain('Ingunn Veblen 2')
    const sign = screen.getByRole('button', { name: 'Sign the peer review' })
    await waitFor(() => expect(sign.getAttribute('aria-description')).toBe('First mark 5 more rows as read.'))
    fireEvent.click(screen.getAllByRole('checkbox', { name: 'Current limit, Knee family read' })[0])
    await waitFor(() => expect(acts()).toMatchObject([{ method: 'POST', path: '/changes/dunlin-47/reading', body: { rows: [{ key: limit.key, hash: limit.hash }] } }]))
    await waitFor(() => expect(line.textContent).toContain('1 of 5 rows read'))
    fireEvent.click(screen.getByRole('button', { name: /mark 2 rows as read/ }))
    await waitFor(() => expect((acts()[1].body as { rows: unknown[] }).rows).toHaveLength(2))
  })

  it('takes a mark off again', async () => {
    const { acts, table } = aReview()
    table[`DELETE /changes/dunlin-47/reading/${encodeURIComponent(limit.key)}`] = reading([])
    open('/changes/dunlin-47/review')
    await screen.findByText('All 5 rows read')
    fireEvent.click(screen.getAllByRole('checkbox', { name: 'Current limit, Knee family read' })[0])
    await waitFor(() => expect(acts()[0]?.method).toBe('DELETE'))
  })

  it('takes a mark back that the server refuses, and says why', async () => {
    const { table } = aReview({ reads: [] })
    table['POST /changes/dunlin-47/reading'] = refusal(409, 'content-differs', 'One row says something else by now.')
    open('/changes/dunlin-47/review')
    await screen.findByText('0 of 5 rows read')
    fireEvent.click(screen.getAllByRole('checkbox', { name: 'Current limit, Knee family read' })[0])
    expect(await screen.findByText('One row says something else by now.')).toBeTruthy()
    await screen.findByText('0 of 5 rows read')
  })

  it('goes through the rows with keys: . and , move, space marks and goes on, Enter comments', async () => {
    const { acts, table } = aReview({ reads: [] })
    table['POST /changes/dunlin-47/reading'] = ({ body }) => reading((body as { rows: { key: string }[] }).rows.map((r) => r.key))
    open('/changes/dunlin-47/review')
    await screen.findByText('0 of 5 rows read')
    const focused = () => (document.activeElement as HTMLElement).dataset.rowKey
    fireEvent.keyDown(document.body, { key: '.' })
    expect(focused()).toBe(gain('3.2', '5.6').key)
    fireEvent.keyDown(document.activeElement!, { key: '.' })
    expect(focused()).toBe(limit.key)
    fireEvent.keyDown(document.activeElement!, { key: ',' })
    expect(focused()).toBe(gain('3.2', '5.6').key)
    fireEvent.keyDown(document.activeElement!, { key: ' ' })
    expect(focused()).toBe(limit.key)
    await waitFor(() => expect(acts()).toMatchObject([{ method: 'POST', body: { rows: [{ key: gain('3.2', '5.6').key }] } }]))
    fireEvent.keyDown(document.activeElement!, { key: ',' })
    fireEvent.keyDown(document.activeElement!, { key: ' ' })
    expect(focused()).toBe(limit.key)
    expect(acts()).toHaveLength(1)
    fireEvent.keyDown(document.activeElement!, { key: 'Enter' })
    expect(document.activeElement).toBe(screen.getByLabelText('Comment on Current limit, Knee family'))
    fireEvent.keyDown(document.activeElement!, { key: '.' })
    expect(document.activeElement).toBe(screen.getByLabelText('Comment on Current limit, Knee family'))
  })

  it('shows no marks to who does not read to sign', async () => {
    aReview({ me: mirela, mark: false, reads: [] })
    open('/changes/dunlin-47/review')
    await screen.findByRole('table', { name: 'what alters in the Knee family' })
    expect(screen.queryByRole('checkbox', { name: 'Current limit, Knee family read' })).toBeNull()
  })

  it('says beside each value what it does alone, and where its origin alters', async () => {
    aReview()
    open('/changes/dunlin-47/review')
    const table = await screen.findByRole('table', { name: 'what alters in the Knee family' })
    await waitFor(() => expect(within(table).getByRole('row', { name: /Current limit/ }).textContent).toMatch(/torque at clamp.*5\.70.*6\.51/))
    expect(within(table).getAllByRole('row', { name: /Velocity gain/ })[1].textContent).toMatch(/joint.*family/)
  })
})

describe('comments', () => {
  it('keep the change from being signed while they are open, and are marked answered', async () => {
    const { acts, table } = aReview({ comments: [aComment()] })
    table['POST /changes/dunlin-47/comments/1/answered'] = { body: commentsView([aComment({ answered: { by: 'Rafiq Sandoval', at: '2026-11-30T15:00:00Z' } })]) }
    open('/changes/dunlin-47/review')
    const sign = await screen.findByRole('button', { name: 'Sign the peer review' })
    await waitFor(() => expect(sign.getAttribute('aria-description')).toBe('First have one open comment answered.'))
    expect(screen.getAllByRole('button', { name: '1 comment on Current limit, Knee family, 1 open' })[0]).toBeTruthy()
    fireEvent.click(screen.getByRole('button', { name: 'mark answered, comment 1' }))
    await waitFor(() => expect(sign.getAttribute('aria-description')).toBe('State what you sign first.'))
    expect(acts()).toMatchObject([{ method: 'POST', path: '/changes/dunlin-47/comments/1/answered' }])
  })

  it('are hung on a row, with people named by an at sign', async () => {
    const { acts, table } = aReview({ people: ['Tobias Oyelaran', 'Mirela Castanho'] })
    table['POST /changes/dunlin-47/comments'] = { status: 201, body: { ...commentsView([aComment()]), written: 1 } }
    open('/changes/dunlin-47/review')
    fireEvent.click((await screen.findAllByRole('button', { name: 'comment on Current limit, Knee family' }))[0])
    const field = screen.getByLabelText<HTMLTextAreaElement>('Comment on Current limit, Knee family')
    fireEvent.change(field, { target: { value: 'Heard it, @tob' } })
    field.setSelectionRange(14, 14)
    fireEvent.select(field)
    expect(screen.getAllByRole('option').map((o) => o.textContent)).toEqual(['Tobias Oyelaran'])
    fireEvent.keyDown(field, { key: 'Enter' })
    expect(field.value).toBe('Heard it, @Tobias Oyelaran ')
    fireEvent.keyDown(field, { key: 'Enter', ctrlKey: true })
    await waitFor(() => expect(acts()).toMatchObject([{ path: '/changes/dunlin-47/comments', body: { text: 'Heard it, @Tobias Oyelaran ', on: { kind: 'value', pointer: limit.pointer } } }]))
    await waitFor(() => expect(screen.getByLabelText<HTMLTextAreaElement>('Comment on the change').value).toBe(''))
  })

  it('keep what was typed when they are refused', async () => {
    const { table } = aReview()
    table['POST /changes/dunlin-47/comments'] = refusal(409, 'wrong-state', 'The change is released. Nothing was written.')
    open('/changes/dunlin-47/review')
    const field = await screen.findByLabelText<HTMLTextAreaElement>('Comment on the change')
    fireEvent.change(field, { target: { value: 'Well done.' } })
    fireEvent.click(screen.getByRole('button', { name: 'Write the comment' }))
    expect(await screen.findByText('The change is released. Nothing was written.')).toBeTruthy()
    expect(field.value).toBe('Well done.')
  })

  it('lead to the row that they hang on, and stand under one another', async () => {
    aReview({ comments: [aComment(), aComment({ number: 2, under: 1, by: 'Mirela Castanho', text: 'Faint.' })] })
    open('/changes/dunlin-47/review')
    const comment = await screen.findByRole('listitem', { name: 'comment 1 by Rafiq Sandoval' })
    expect(within(comment).getByText('Faint.')).toBeTruthy()
    fireEvent.click(within(comment).getByRole('button', { name: 'Current limit, Knee family' }))
    expect((document.activeElement as HTMLElement).dataset.rowKey).toBe(limit.key)
  })

  it('give who may not write no field', async () => {
    aReview({ comments: [aComment({ may: { answer: no('x') } })], mayWrite: false })
    open('/changes/dunlin-47/review')
    await screen.findByText('Heard on the bench?')
    expect(screen.queryByLabelText('Comment on the change')).toBeNull()
    expect(screen.queryByRole('button', { name: 'mark answered, comment 1' })).toBeNull()
    expect(screen.queryByRole('button', { name: 'comment on Velocity gain, Knee family' })).toBeNull()
  })
})

describe('the history', () => {
  it('tells which step voided which signature, and folds draft points', async () => {
    aReview({
      change: {
        events: [
          { kind: 'drafted', person: 'Mirela Castanho', at: '2026-11-28T09:00:00Z', note: '' },
          { kind: 'returned', person: 'Hedda Lindqvist', at: '2026-11-29T12:00:00Z', note: 'Try 4.4.' },
        ],
        signatures: [{ meaning: 'peer review', statement: 'I stood by it.', person: 'Ingunn Veblen', at: '2026-11-29T09:00:00Z', contentHash: 'x', void: true }],
      },
      points: [
        { number: 2, by: 'Mirela Castanho', at: '2026-11-28T09:05:00Z', edits: [{ pointer: '/families/knee/values/velocityGain', from: 3.2, to: 5.6 }] },
        { number: 1, by: 'Mirela Castanho', at: '2026-11-28T09:00:00Z', edits: [] },
      ],
    })
    open('/changes/dunlin-47/review')
    const history = await screen.findByRole('region', { name: 'history of the change' })
    fireEvent.click(await within(history).findByRole('button', { name: '2 draft points' }))
    expect(history.textContent).toContain('Velocity gain of the Knee family')
    expect(history.textContent).toMatch(/returned Hedda Lindqvist“Try 4\.4\.”peer review of Ingunn Veblen.*is void from here on/)
  })
})

/** The button, once what was read and said is known and nothing of it stands in the way. */
async function readyToSign() {
  const sign = await screen.findByRole('button', { name: 'Sign the peer review' })
  await waitFor(() => expect(sign.getAttribute('aria-description')).toBe('State what you sign first.'))
  return sign
}

describe('the peer review', () => {
  it('is signed with the statement made and the password entered, on the very content shown', async () => {
    const { acts, table } = aReview()
    table['POST /changes/dunlin-47/sign'] = { body: aChange({ state: 'approved', life: 'approved', revision: 10, contentHash: hash }) }
    open('/changes/dunlin-47/review')
    const sign = await readyToSign()
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
    await readyToSign()
    fireEvent.click(screen.getByLabelText(statements['peer review']))
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
    expect(screen.getByText('Ingunn Veblen').parentElement!.className).toContain('line-through')
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

