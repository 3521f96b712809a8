import { useState } from 'react'
import type { BoardView, Dump } from '../../../../shared/contract/boards.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { dumpOfFile } from '../dump-of-file.ts'
import { useReadBack } from '../mutations.ts'
import { DumpField } from './dump-field.tsx'
import { ReadBackDetails } from './read-back-result.tsx'

/** Compares what was read from a board with what it is recorded to hold, and records the outcome. */
export function ReadBackDialog({ board, onClose }: { board: BoardView; onClose: () => void }) {
  const [dump, setDump] = useState<Dump | null>(null)
  const [unread, setUnread] = useState<unknown>(null)
  const verify = useReadBack(board.serial)
  const done = verify.data?.lastReadBack
  const choose = (file: File) => {
    verify.reset()
    setUnread(null)
    dumpOfFile(file).then(setDump, setUnread)
  }
  return (
    <Dialog
      open
      wide
      onClose={onClose}
      title={`Read back ${board.serial}`}
      busy={verify.isPending}
      actions={
        done ? (
          <Button kind="primary" onClick={onClose}>
            Close
          </Button>
        ) : (
          <>
            <Button kind="primary" pending={verify.isPending} unavailable={dump ? null : 'Choose the file first.'} onClick={() => dump && verify.mutate({ dump })}>
              Compare and record
            </Button>
            <Button onClick={onClose}>Not now</Button>
          </>
        )
      }
    >
      {done ? (
        <ReadBackDetails result={done} />
      ) : (
        <>
          <p className="text-13">
            Against {board.release ? <>release <span className="num">{board.release}</span>, which it is recorded to hold</> : <>the newest release; nothing is recorded of what it holds</>}. The outcome goes into its history and the ledger, whichever it is.
          </p>
          <DumpField label="read-back" fileName={dump?.fileName ?? null} onFile={choose} help="Raw image, Intel HEX, S-record, or a table of addresses and values; the ending says which." />
          <ProblemPanel problem={unread ?? verify.error} />
        </>
      )}
    </Dialog>
  )
}
