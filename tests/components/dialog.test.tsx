// @vitest-environment jsdom
import './setup-dom.ts'
import { fireEvent, render, screen } from '@testing-library/react'
import { useState } from 'react'
import { describe, expect, it, vi } from 'vitest'
import { Button } from '../../src/components/ui/button.tsx'
import { ConfirmByName } from '../../src/components/ui/confirm-by-name.tsx'
import { Dialog } from '../../src/components/ui/dialog.tsx'
import { TextField } from '../../src/components/ui/text-field.tsx'

function Page({ busy = false }: { busy?: boolean }) {
  const [open, setOpen] = useState(false)
  const [text, setText] = useState('')
  return (
    <>
      <Button onClick={() => setOpen(true)}>Return…</Button>
      <Dialog open={open} onClose={() => setOpen(false)} title="Return the change" busy={busy} actions={<Button>Return</Button>}>
        <TextField label="Reason" value={text} onChange={setText} />
      </Dialog>
    </>
  )
}

/** What Esc does to a native dialog. */
const escape = () => fireEvent(screen.getByRole('dialog'), new Event('cancel', { cancelable: true }))

describe('a dialog', () => {
  it('opens modal, named by its title, with the focus in its first field, and gives the focus back', () => {
    const modal = vi.spyOn(HTMLDialogElement.prototype, 'showModal')
    render(<Page />)
    const opener = screen.getByRole('button', { name: 'Return…' })
    opener.focus()
    fireEvent.click(opener)
    expect(screen.getByRole('dialog', { name: 'Return the change' })).toBeTruthy()
    expect(modal).toHaveBeenCalledTimes(1)
    expect(document.activeElement).toBe(screen.getByLabelText('Reason'))
    escape()
    expect(screen.queryByRole('dialog')).toBeNull()
    expect(document.activeElement).toBe(opener)
  })

  it('stays while an act is under way', () => {
    render(<Page busy />)
    fireEvent.click(screen.getByRole('button', { name: 'Return…' }))
    escape()
    expect(screen.getByRole('dialog')).toBeTruthy()
  })
})

describe('a confirmation by name', () => {
  const confirm = vi.fn()
  const show = (unavailable: string | null = null) =>
    render(
      <ConfirmByName open onClose={() => {}} title="Withdraw Dunlin 1.6.2" name="Dunlin 1.6.2" noun="release" act="Withdraw" onConfirm={confirm} unavailable={unavailable}>
        <p>Two boards hold it.</p>
      </ConfirmByName>,
    )

  it('acts only once the very name is written, and says so until then', () => {
    confirm.mockClear()
    show()
    const act = screen.getByRole('button', { name: 'Withdraw' })
    const field = screen.getByLabelText('Write the name of the release')
    expect(act.getAttribute('aria-disabled')).toBe('true')
    expect(act.title).toBe('Write "Dunlin 1.6.2" first.')
    fireEvent.click(act)
    fireEvent.change(field, { target: { value: 'Dunlin 1.6.' } })
    fireEvent.keyDown(field, { key: 'Enter' })
    expect(confirm).not.toHaveBeenCalled()
    fireEvent.change(field, { target: { value: 'Dunlin 1.6.2' } })
    fireEvent.click(act)
    expect(confirm).toHaveBeenCalledTimes(1)
  })

  it('waits for other causes too, by Enter as well', () => {
    confirm.mockClear()
    show('A reason is missing.')
    const field = screen.getByLabelText('Write the name of the release')
    fireEvent.change(field, { target: { value: 'Dunlin 1.6.2' } })
    fireEvent.keyDown(field, { key: 'Enter' })
    expect(confirm).not.toHaveBeenCalled()
    expect(screen.getByRole('button', { name: 'Withdraw' }).title).toBe('A reason is missing.')
  })
})

it('keeps a button that cannot be pressed reachable, with its reason, and dead', () => {
  const act = vi.fn()
  render(<Button unavailable="One concession is missing." onClick={act}>Submit</Button>)
  const button = screen.getByRole('button', { name: 'Submit' }) as HTMLButtonElement
  expect(button.disabled).toBe(false)
  expect(button.getAttribute('aria-description')).toBe('One concession is missing.')
  fireEvent.click(button)
  expect(act).not.toHaveBeenCalled()
})
