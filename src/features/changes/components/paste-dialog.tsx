import { useMemo, useState } from 'react'
import type { Edit } from '../../../../shared/parameters/edits.ts'
import { Arrow } from '../../../components/ui/arrow.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { FindingMark } from '../../../components/ui/finding-mark.tsx'
import { TextArea } from '../../../components/ui/text-area.tsx'
import { count } from '../../../lib/format.ts'
import { editsOf, placeBlock, readBlock, type PastedBlock, type PastedCell, type PasteTarget } from '../paste-block.ts'
import { shownValue } from '../typed-value.ts'

export interface PasteDialogProps {
  /** what was pasted over the table; empty: it is pasted here */
  text: string
  target: PasteTarget
  onTake: (edits: Edit[]) => void
  onClose: () => void
}

/** Bad cells named in the list at once. */
const NAMED = 12

/** A block from a spreadsheet before it is taken: every cell with what it would alter, or why not. The good ones are taken in one step, or none. */
export function PasteDialog({ text: pasted, target, onTake, onClose }: PasteDialogProps) {
  const [text, setText] = useState(pasted)
  const block = useMemo(() => {
    const cells = readBlock(text)
    return cells.length === 0 ? null : placeBlock(cells, target)
  }, [text, target])
  const { set = 0, bad = 0 } = block?.counts ?? {}
  const from = `${target.rows[target.anchor.row]?.title ?? ''}, ${target.columns[target.anchor.column]?.title ?? ''}`
  return (
    <Dialog
      open
      wide
      title="Paste a block"
      onClose={onClose}
      actions={
        <>
          <Button kind="primary" unavailable={!block ? 'Paste a block first.' : set === 0 ? 'No cell of the block alters anything.' : null} onClick={() => block && onTake(editsOf(block))}>
            {bad > 0 && set > 0 ? `Take the ${count(set, 'good one')}` : `Take ${count(set, 'value')}`}
          </Button>
          <Button onClick={onClose}>{bad > 0 ? 'Take none' : 'Cancel'}</Button>
        </>
      }
    >
      {!pasted && <TextArea label="Block" rows={4} value={text} onChange={setText} help="Rows by lines, cells by tabs, as a spreadsheet copies them. Units may be typed. A first row of joints and a first column of parameters are understood." />}
      {block && (
        <>
          <p className="text-13" role="status">
            {block.headings ? `Laid by its headings: ${block.headings}.` : `Laid from ${from}.`} {count(set, 'value')} would alter, {block.counts.same} stand already{block.counts.empty > 0 && `, ${count(block.counts.empty, 'empty cell')} left as they are`}
            {bad > 0 ? `, ${count(bad, 'cell')} can't be taken.` : '.'}
          </p>
          <BadCells block={block} />
          <Preview block={block} />
        </>
      )}
    </Dialog>
  )
}

const nameOf = (cell: PastedCell) => [cell.parameter?.title, cell.column?.title].filter(Boolean).join(', ') || 'outside the table'

function BadCells({ block }: { block: PastedBlock }) {
  const bad = block.rows.flatMap((r) => r.cells.filter((c) => c.kind === 'bad'))
  if (bad.length === 0) return null
  return (
    <ul aria-label="cells that can't be taken" className="text-13">
      {bad.slice(0, NAMED).map((cell, k) => (
        <li key={k} className="flex gap-2 border-t border-hairline py-1">
          <FindingMark level="block" size={14}>
            {null}
          </FindingMark>
          <span>
            <b>{nameOf(cell)}</b>: <span className="num">“{cell.text}”</span> {cell.kind === 'bad' && cell.why}
          </span>
        </li>
      ))}
      {bad.length > NAMED && <li className="text-ink-2">and {count(bad.length - NAMED, 'cell')} more, marked below</li>}
    </ul>
  )
}

function Preview({ block }: { block: PastedBlock }) {
  return (
    // A keyboard scrolls it too.
    <div className="max-h-[46vh] overflow-auto border border-hairline" tabIndex={0} role="region" aria-label="block as it would be taken">
      <table className="table table-dense text-13" aria-label="pasted values">
        <thead>
          <tr>
            <th scope="col">Parameter</th>
            {block.columns.map((c, k) => (
              <th key={k} scope="col" className="end">
                {c?.title ?? '–'}
              </th>
            ))}
          </tr>
        </thead>
        <tbody>
          {block.rows.map((row, r) => (
            <tr key={r}>
              <th scope="row" className="!border-hairline font-normal whitespace-nowrap !text-ink">
                {row.parameter?.title ?? '–'} <span className="text-12 text-ink-2">{row.parameter?.unit}</span>
              </th>
              {row.cells.map((cell, c) => (
                <td key={c} className={`end ${cell.kind === 'bad' ? 'bg-oxide-wash text-oxide' : ''}`} title={cell.kind === 'bad' ? cell.why : undefined}>
                  <Cell cell={cell} />
                </td>
              ))}
            </tr>
          ))}
        </tbody>
      </table>
    </div>
  )
}

function Cell({ cell }: { cell: PastedCell }) {
  if (cell.kind === 'bad')
    return (
      <span className="inline-flex items-center gap-1">
        <span className="num">{cell.text}</span>
        <FindingMark level="block" size={11}>
          <span className="sr-only">can't be taken</span>
        </FindingMark>
      </span>
    )
  if (cell.kind === 'empty') return <span className="text-ink-2">left</span>
  if (cell.kind === 'same') return <span className="num text-ink-2">{shownValue(cell.at?.value)}</span>
  return (
    <span className="num">
      <span className="text-ink-2">{shownValue(cell.at?.value)}</span>
      <Arrow />
      <span className="font-medium text-brass">{shownValue(cell.value)}</span>
    </span>
  )
}
