import { useState } from 'react'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { FindingMark } from '../../../components/ui/finding-mark.tsx'
import { Select } from '../../../components/ui/select.tsx'
import { Table, type Column } from '../../../components/ui/table.tsx'
import type { BoardTableRow } from '../../../../shared/contract/boards.ts'
import { count } from '../../../lib/format.ts'
import { useImportBoards, usePreviewImport } from '../mutations.ts'

interface ImportDialogProps {
  machines: readonly { key: string; name: string }[]
  machine: string
  onClose: () => void
}

const columns: Column<BoardTableRow>[] = [
  { key: 'line', head: 'Line', align: 'end', className: 'num text-ink-2', cell: (r) => r.line },
  { key: 'serial', head: 'Board', className: 'num whitespace-nowrap', cell: (r) => r.serial.slice(0, 40) || '–' },
  { key: 'joint', head: 'Joint', cell: (r) => r.joint ?? <span className="text-ink-2">none</span> },
  { key: 'release', head: 'Holds', className: 'num', cell: (r) => r.release ?? '–' },
  { key: 'does', head: 'What it does', className: 'text-13', cell: (r) => (r.problem !== null ? <FindingMark level="block">{r.problem}</FindingMark> : r.does.length > 0 ? r.does.join('; ') : <span className="text-ink-2">stands so already</span>) },
]

/** Imports a CSV table of boards, after showing what each row would do. */
export function ImportDialog({ machines, machine: first, onClose }: ImportDialogProps) {
  const [machine, setMachine] = useState(first)
  const [text, setText] = useState('')
  const [name, setName] = useState('')
  const preview = usePreviewImport()
  const take = useImportBoards()
  const look = (of: string, what: string) => {
    take.reset()
    preview.mutate({ machine: of, text: what })
  }
  const choose = async (file: File) => {
    const read = await file.text()
    setName(file.name)
    setText(read)
    look(machine, read)
  }
  const seen = preview.data
  const missing = !seen ? 'Choose a file first.' : seen.problems > 0 ? 'Correct the rows that are named first.' : seen.alters === 0 ? 'Every row stands so already.' : null
  return (
    <Dialog
      open
      wide
      onClose={onClose}
      title="Import boards"
      busy={take.isPending}
      actions={
        take.data ? (
          <Button kind="primary" onClick={onClose}>
            Close
          </Button>
        ) : (
          <>
            <Button kind="primary" pending={take.isPending} unavailable={missing} onClick={() => seen && take.mutate({ machine, text, decidedOn: seen.hash })}>
              {seen ? `Import ${count(seen.alters, 'row')}` : 'Import'}
            </Button>
            <Button onClick={onClose}>Not now</Button>
          </>
        )
      }
    >
      {take.data ? (
        <p role="status">{count(take.data.alters, 'row')} imported; each board's history and the ledger say what was recorded.</p>
      ) : (
        <>
          <div className="flex flex-wrap items-end gap-3">
            {machines.length > 1 && (
              <Select
                label="Machine"
                width={200}
                value={machine}
                onChange={(key) => {
                  setMachine(key)
                  if (text !== '') look(key, text)
                }}
                options={machines.map((m) => ({ value: m.key, label: m.name }))}
              />
            )}
            <label className="btn focus-within:outline-2 focus-within:outline-offset-2 focus-within:outline-brass">
              Choose the table
              <input type="file" accept=".csv,.txt,text/csv" className="sr-only" onChange={(event) => {
                const [file] = event.target.files ?? []
                if (file) void choose(file)
                // The same file may be chosen again after it was corrected.
                event.target.value = ''
              }} />
            </label>
            {name && <span className="num py-2 text-13">{name}</span>}
          </div>
          <p className="help">
            CSV; the first line names the columns: <span className="num">serial</span>, and any of <span className="num">joint</span>, <span className="num">release</span>, <span className="num">firmware</span>, <span className="num">machine</span>. An export can be edited and imported again. A release stands for a flash as recorded, never for a read-back.
          </p>
          {seen && (
            <div className="max-h-[44dvh] overflow-auto">
              <Table dense label="rows of the table" rows={seen.rows} columns={columns} rowKey={(r) => String(r.line)} empty="The table holds no row." />
            </div>
          )}
          <ProblemPanel problem={take.error ?? preview.error} />
        </>
      )}
    </Dialog>
  )
}
