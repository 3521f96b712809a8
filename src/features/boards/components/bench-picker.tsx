import { useRef, useState } from 'react'
import { useNavigate } from 'react-router'
import { Link } from 'react-router'
import type { MachineBoards } from '../../../../shared/contract/boards.ts'
import { paths } from '../../../app/paths.ts'
import { BoardMark } from '../../../components/ui/board-mark.tsx'
import { HexAddress } from '../../../components/ui/hex-address.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { mostPressingFirst } from '../most-pressing.ts'
import { whatWasScanned } from '../what-was-scanned.ts'

interface BenchPickerProps {
  boards: MachineBoards
  /** the joint at work */
  joint: string | null
  /** a board in hand whose joint is not picked yet */
  serial: string | null
  /** the field takes the focus: a scanner types at once */
  autoFocus?: boolean
}

/** Picks the joint at work: by a scanned serial number, or from the list, most pressing first. */
export function BenchPicker({ boards, joint, serial, autoFocus = false }: BenchPickerProps) {
  const navigate = useNavigate()
  // without a current release only what was flashed all the same is recorded here
  const withdrawn = boards.current === null
  const [typed, setTyped] = useState('')
  const [words, setWords] = useState<string | null>(null)
  const field = useRef<HTMLInputElement>(null)
  const scan = () => {
    if (typed.trim() === '') return
    const found = whatWasScanned(typed, boards)
    setTyped('')
    if (found.kind === 'joint') {
      setWords(null)
      void navigate(paths.bench(boards.machine, { joint: found.joint, serial: found.serial ?? undefined, withdrawn }))
    } else {
      setWords(found.words)
      if (found.kind === 'board') void navigate(paths.bench(boards.machine, { serial: found.serial, withdrawn }))
    }
  }
  return (
    <div>
      <TextField
        ref={field}
        label="Scan a board, or write its serial number"
        mono
        autoFocus={autoFocus}
        autoComplete="off"
        autoCapitalize="characters"
        spellCheck={false}
        enterKeyHint="go"
        value={typed}
        onChange={setTyped}
        onKeyDown={(event) => {
          if (event.key !== 'Enter') return
          event.preventDefault()
          scan()
        }}
      />
      <p role="status" className="min-h-[18px] pt-1 text-13 text-plum">
        {words ?? (serial && joint === null ? `${serial} in hand; pick the joint it goes to.` : '')}
      </p>
      <ul className="mt-2 border-t border-ink" aria-label="joints">
        {mostPressingFirst(boards.joints).map((j) => (
          <li key={j.joint} className="border-b border-hairline">
            <Link
              to={paths.bench(boards.machine, { joint: j.joint, serial: joint === null ? (serial ?? undefined) : undefined, withdrawn })}
              aria-current={j.joint === joint ? 'page' : undefined}
              className={`grid min-h-[48px] grid-cols-[3.2rem_minmax(0,1fr)_auto] items-center gap-x-3 px-1 py-[6px] text-ink no-underline hover:bg-brass-wash ${j.joint === joint ? 'bg-brass-wash' : ''}`}
            >
              <span>
                <HexAddress address={j.address} />
                <span className="block text-12 leading-4 text-ink-2">{j.bus}</span>
              </span>
              <span className="min-w-0">
                <b className="font-medium">{j.name}</b>
                <BoardMark state={j.state} size={14} className="flex text-12" />
              </span>
              <span className="num text-right text-13">{j.board?.serial ?? <span className="text-ink-2">no board</span>}</span>
            </Link>
          </li>
        ))}
      </ul>
    </div>
  )
}
