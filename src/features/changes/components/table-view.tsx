import { useMemo, useState } from 'react'
import { useNavigate } from 'react-router'
import type { Finding } from '../../../../shared/contract/checks.ts'
import type { Edit } from '../../../../shared/parameters/edits.ts'
import type { MachineSet } from '../../../../shared/parameters/machine-set.ts'
import { Button } from '../../../components/ui/button.tsx'
import { EmptyState } from '../../../components/ui/empty-state.tsx'
import { ViewSwitch } from '../../../components/ui/view-switch.tsx'
import { selectionOf, startState } from '../grid-state.ts'
import { origins, scopeQuery, showings, type Scope, type Showing } from '../scope.ts'
import type { PasteTarget } from '../paste-block.ts'
import type { Schemas } from '../value-cells.ts'
import { columnsOf, isOutOfPolicy, outOfPolicy, rowsOf, rowWanted, TableCells } from '../value-table.ts'
import { FillDialog } from './fill-dialog.tsx'
import { PasteDialog } from './paste-dialog.tsx'
import { ValueGrid } from './value-grid.tsx'
import { ValueInspector } from './value-inspector.tsx'

export interface TableViewProps {
  set: MachineSet
  base: MachineSet
  schemas: Schemas
  scope: Scope
  findings: readonly Finding[]
  /** null: read only */
  onEdit: ((edits: Edit[]) => void) | null
}

const showingWords: Record<Showing, string> = { all: 'all', changed: 'changed', policy: 'out of policy' }

/** The values as a table: what stands in it is chosen above, the chosen cell is shown in full, blocks are pasted and values filled. */
export function TableView({ set, base, schemas, scope, findings, onEdit }: TableViewProps) {
  const [stands, setStands] = useState(startState)
  const [pasted, setPasted] = useState<{ text: string } | null>(null)
  const [filling, setFilling] = useState(false)
  const families = useMemo(() => (scope.columns === 'family' && scope.family !== null ? [scope.family] : Object.keys(set.families)), [scope.columns, scope.family, set.families])
  const columns = useMemo(() => columnsOf(set, families), [set, families])
  const cells = useCells(set, base, schemas)
  const out = useMemo(() => outOfPolicy(findings, set, schemas), [findings, set, schemas])
  const { showing, origin } = scope
  const groups = useMemo(
    () =>
      rowsOf(set, families, schemas)
        .map(({ law, rows }) => ({ law, rows: rows.filter((p) => rowWanted({ showing, origin }, columns, p, cells, (cell) => isOutOfPolicy(out, cell, set))) }))
        .filter((g) => g.rows.length > 0),
    [set, families, schemas, showing, origin, columns, cells, out],
  )
  const rows = groups.flatMap((g) => g.rows)
  const anchor = { row: Math.min(stands.row, rows.length - 1), column: Math.min(stands.column, columns.length - 1) }
  const at = rows.length > 0 ? cells.at(columns[anchor.column], rows[anchor.row]) : null
  const selection = selectionOf(stands)
  const target: PasteTarget = { rows, columns, anchor: { row: Math.min(selection.top, rows.length - 1), column: selection.left }, at: (column, row) => cells.at(column, row) }
  return (
    <>
      <Filters scope={scope} family={scope.family === null ? '' : set.families[scope.family].name} />
      {at && onEdit && (
        <div className="mb-2 flex flex-wrap gap-2">
          <Button small onClick={() => setPasted({ text: '' })}>
            Paste a block…
          </Button>
          <Button small aria-keyshortcuts="Control+D" unavailable={at.value === undefined ? 'The chosen cell holds no value.' : null} onClick={() => setFilling(true)}>
            Fill to joints…
          </Button>
        </div>
      )}
      {at && <ValueInspector key={at.pointer} at={at} set={set} schemas={schemas} onEdit={onEdit} />}
      {rows.length === 0 ? (
        <Nothing showing={showing} filtered={origin !== null} />
      ) : (
        <ValueGrid
          // Another choice of rows, columns, family or joint begins at its own first cell.
          key={`${families.join()} ${showing} ${origin ?? ''} ${scope.joint ?? scope.family}`}
          label={families.length === 1 ? `values of the ${set.families[families[0]].name} family` : 'values of every joint'}
          set={set}
          columns={columns}
          groups={groups}
          cells={cells}
          out={out}
          joint={scope.joint}
          at={scope.joint ?? `family ${scope.family}`}
          onEdit={onEdit}
          onChosen={setStands}
          onPaste={(text) => setPasted({ text })}
          onFill={() => at?.value !== undefined && setFilling(true)}
        />
      )}
      {pasted && onEdit && (
        <PasteDialog
          text={pasted.text}
          target={target}
          onClose={() => setPasted(null)}
          onTake={(edits) => {
            setPasted(null)
            onEdit(edits)
          }}
        />
      )}
      {filling && at && onEdit && (
        <FillDialog
          from={at}
          row={rows[anchor.row]}
          fromKey={columns[anchor.column].key}
          set={set}
          columns={columns}
          cells={cells}
          chosen={columns.slice(selection.left, selection.right + 1).map((c) => c.key)}
          onClose={() => setFilling(false)}
          onFill={(edits) => {
            setFilling(false)
            onEdit(edits)
          }}
        />
      )}
    </>
  )
}

/** Cells by the set they are of; those that did not alter stay the same objects. */
function useCells(set: MachineSet, base: MachineSet, schemas: Schemas): TableCells {
  const [cells, setCells] = useState(() => new TableCells({ set, base, schemas }))
  if (cells.isOf({ set, base, schemas })) return cells
  const next = new TableCells({ set, base, schemas }, cells)
  setCells(next)
  return next
}

function Filters({ scope, family }: { scope: Scope; family: string }) {
  const navigate = useNavigate()
  return (
    <div className="mb-3 flex flex-wrap items-center gap-x-6 gap-y-2">
      <ViewSwitch
        label="columns shown"
        views={[
          { label: 'every joint', to: scopeQuery(scope, { columns: 'all' }), current: scope.columns === 'all' },
          { label: `${family} only`, to: scopeQuery(scope, { columns: 'family' }), current: scope.columns === 'family' },
        ]}
      />
      <ViewSwitch label="rows shown" views={showings.map((showing) => ({ label: showingWords[showing], to: scopeQuery(scope, { showing }), current: scope.showing === showing }))} />
      <label className="flex items-baseline gap-2 text-13 text-ink-2">
        from
        <select aria-label="origin of the values" className="rounded border border-hairline bg-sheet px-1 text-13 text-ink" value={scope.origin ?? ''} onChange={(e) => void navigate(scopeQuery(scope, { origin: origins.find((o) => o === e.target.value) ?? null }), { preventScrollReset: true, replace: true })}>
          <option value="">anywhere</option>
          {origins.map((o) => (
            <option key={o} value={o}>
              {o === 'joint' ? 'the joint itself' : `the ${o}`}
            </option>
          ))}
        </select>
      </label>
    </div>
  )
}

function Nothing({ showing, filtered }: { showing: Showing; filtered: boolean }) {
  if (showing === 'all' && !filtered) return <EmptyState title="No values yet">Give the family a joint with a firmware version; its parameters then stand here.</EmptyState>
  const title = filtered ? 'No value shown here comes from there' : showing === 'changed' ? 'No value here differs from the release' : 'No finding outside policy is about a value here'
  return <EmptyState title={title}>Show all to see the rest.</EmptyState>
}
