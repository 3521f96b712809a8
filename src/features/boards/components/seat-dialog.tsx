import { useQuery } from '@tanstack/react-query'
import { useState } from 'react'
import { useNavigate } from 'react-router'
import { paths } from '../../../app/paths.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { Select } from '../../../components/ui/select.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { useSeatBoard } from '../mutations.ts'
import { machineBoardsQuery } from '../queries.ts'

const nowhere = '-'

export interface SeatDialogProps {
  machines: readonly { key: string; name: string }[]
  machine: string
  /** null: a serial number is typed */
  serial: string | null
  joint: string | null
  onClose: () => void
}

/** Records where a board sits, known or new. */
export function SeatDialog({ machines, machine: first, serial: given, joint: from, onClose }: SeatDialogProps) {
  const seat = useSeatBoard()
  const navigate = useNavigate()
  const [machine, setMachine] = useState(first)
  const [serial, setSerial] = useState(given ?? '')
  const [joint, setJoint] = useState(from ?? nowhere)
  const [note, setNote] = useState('')
  const boards = useQuery(machineBoardsQuery(machine)).data
  const there = boards?.joints.find((j) => j.joint === joint)?.board
  const elsewhere = boards?.joints.find((j) => j.joint === joint)?.calibratedFor
  const record = () => seat.mutate({ machine, serial: serial.trim(), joint: joint === nowhere ? null : joint, note: note.trim() }, { onSuccess: (board) => (given ? onClose() : void navigate(paths.board(board.serial))) })
  return (
    <Dialog
      open
      onClose={onClose}
      title={given ? `Move ${given}` : 'Record a board'}
      busy={seat.isPending}
      actions={
        <>
          <Button kind="primary" pending={seat.isPending} unavailable={serial.trim() === '' ? 'Write the serial number first.' : null} onClick={record}>
            Record it
          </Button>
          <Button onClick={onClose}>Not now</Button>
        </>
      }
    >
      {!given && <TextField label="Serial number" mono autoFocus autoComplete="off" spellCheck={false} value={serial} onChange={setSerial} error={fieldError(seat.error, '/serial')} help="as it stands on the board; a scanner may type it" />}
      {machines.length > 1 && (
        <Select
          label="Machine"
          value={machine}
          onChange={(key) => {
            setMachine(key)
            setJoint(nowhere)
          }}
          options={machines.map((m) => ({ value: m.key, label: m.name }))}
        />
      )}
      <Select label="Joint" value={joint} onChange={setJoint} error={fieldError(seat.error, '/joint')} options={[{ value: nowhere, label: 'off its joint, in a drawer' }, ...(boards?.joints ?? []).map((j) => ({ value: j.joint, label: j.board ? `${j.name}, ${j.board.serial} sits there` : j.name }))]} />
      {there && there.serial !== given && (
        <p className="text-13">
          <span className="num">{there.serial}</span> then counts as off its joint; what it holds stays on record.
        </p>
      )}
      {elsewhere && serial.trim() !== '' && elsewhere.toLowerCase() !== serial.trim().toLowerCase() && (
        <p className="text-13 text-oxide">
          The board-bound values of this joint were measured on <span className="num">{elsewhere}</span>. Its downloads are refused until values measured on <span className="num">{serial.trim()}</span> are released.
        </p>
      )}
      <TextField label="Note" value={note} onChange={setNote} maxLength={500} help="why, if it helps the next person" />
      <ProblemPanel problem={seat.error} shown={['/serial', '/joint']} />
    </Dialog>
  )
}
