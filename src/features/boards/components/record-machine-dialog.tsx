import { useQuery } from '@tanstack/react-query'
import { useRef, useState } from 'react'
import type { KeyboardEvent } from 'react'
import type { MachineBoards } from '../../../../shared/contract/boards.ts'
import { Region } from '../../../components/layout/region.tsx'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { BoardMark } from '../../../components/ui/board-mark.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Caution } from '../../../components/ui/caution.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { HexAddress } from '../../../components/ui/hex-address.tsx'
import { Select } from '../../../components/ui/select.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { count } from '../../../lib/format.ts'
import { useRecordMachine } from '../mutations.ts'
import { machineBoardsQuery } from '../queries.ts'

interface RecordMachineDialogProps {
  machines: readonly { key: string; name: string }[]
  machine: string
  onClose: () => void
}

/** Records which boards were flashed with a machine's current release, all in one go. */
export function RecordMachineDialog({ machines, machine: first, onClose }: RecordMachineDialogProps) {
  const [machine, setMachine] = useState(first)
  const boards = useQuery(machineBoardsQuery(machine))
  return (
    <Dialog open wide onClose={onClose} title="Record a whole machine">
      {machines.length > 1 && <Select label="Machine" width={240} value={machine} onChange={setMachine} options={machines.map((m) => ({ value: m.key, label: m.name }))} />}
      <Region query={boards} what="its joints" lines={6}>
        {(data) =>
          data.current ? (
            <Rows key={machine} boards={data} release={data.current.version} onClose={onClose} />
          ) : (
            <p className="text-13">{data.newest ? `${data.machineName} ${data.newest.version} is withdrawn, and there is no release after it: nothing is to be flashed.` : `${data.machineName} has no release yet.`}</p>
          )
        }
      </Region>
    </Dialog>
  )
}

/** Boards that may have been flashed: those recorded at a joint whose values are theirs; on a machine without any board, those its values were measured on. */
function firstSerials({ joints }: MachineBoards): Record<string, string> {
  const bare = joints.every((j) => j.board === null)
  return Object.fromEntries(joints.map((j) => [j.joint, bare ? (j.calibratedFor ?? '') : j.state === 'not calibrated for this joint' ? '' : (j.board?.serial ?? '')]))
}

function Rows({ boards, release, onClose }: { boards: MachineBoards; release: string; onClose: () => void }) {
  const record = useRecordMachine()
  const [serials, setSerials] = useState<Record<string, string>>(() => firstSerials(boards))
  const list = useRef<HTMLUListElement>(null)
  const given = boards.joints.flatMap((j) => (serials[j.joint].trim() === '' ? [] : [{ joint: j.joint, serial: serials[j.joint].trim() }]))
  const errorOf = (joint: string) => {
    const i = given.findIndex((g) => g.joint === joint)
    return i < 0 ? null : (fieldError(record.error, `/boards/${i}/serial`) ?? fieldError(record.error, `/boards/${i}/joint`))
  }
  /** A scanner ends with Enter: on to the next joint. */
  const onKey = (event: KeyboardEvent<HTMLUListElement>) => {
    if (event.key !== 'Enter' || !(event.target instanceof HTMLInputElement)) return
    event.preventDefault()
    const fields = [...(list.current?.querySelectorAll('input') ?? [])]
    const next = fields[fields.indexOf(event.target) + 1]
    next?.focus()
    next?.select()
  }
  return (
    <>
      <p className="text-13">
        Each board named here was flashed with <span className="num">{release}</span>; none was read back. Leave a joint empty to leave it out. A scanner may type: Enter goes on to the next joint.
      </p>
      <ul ref={list} onKeyDown={onKey} className="max-h-[46dvh] overflow-y-auto border-y border-rule pr-2">
        {boards.joints.map((j) => (
          <li key={j.joint} className="grid grid-cols-[minmax(0,1fr)_minmax(0,1fr)] items-center gap-x-3 border-b border-hairline py-1 last:border-0 sm:grid-cols-[minmax(0,8rem)_4rem_minmax(0,15rem)_minmax(0,1fr)]">
            <b className="font-medium">{j.name}</b>
            <HexAddress address={j.address} className="max-sm:hidden" />
            <TextField label={`Serial number at ${j.name}`} hideLabel mono autoComplete="off" spellCheck={false} value={serials[j.joint]} onChange={(text) => setSerials({ ...serials, [j.joint]: text })} error={errorOf(j.joint)} />
            <span className="text-13 max-sm:hidden">
              <BoardMark state={j.state} size={15} />
            </span>
          </li>
        ))}
      </ul>
      <Caution />
      <ProblemPanel problem={record.error} shown={given.flatMap((_, i) => [`/boards/${i}/serial`, `/boards/${i}/joint`])} />
      <div className="flex flex-wrap gap-3">
        <Button kind="primary" pending={record.isPending} unavailable={given.length === 0 ? 'Write a serial number first.' : null} onClick={() => record.mutate({ machine: boards.machine, release, boards: given }, { onSuccess: onClose })}>
          Record {count(given.length, 'flash', 'flashes')} of {release}
        </Button>
        <Button onClick={onClose}>Not now</Button>
      </div>
    </>
  )
}
