import { useState } from 'react'
import { useNavigate } from 'react-router'
import type { Finding } from '../../../../shared/contract/checks.ts'
import type { Edit } from '../../../../shared/parameters/edits.ts'
import type { MachineSet } from '../../../../shared/parameters/machine-set.ts'
import { toPointer } from '../../../../shared/parameters/paths.ts'
import { Button } from '../../../components/ui/button.tsx'
import { EmptyState } from '../../../components/ui/empty-state.tsx'
import { ViewSwitch } from '../../../components/ui/view-switch.tsx'
import type { DraftState } from '../draft-keeper.ts'
import { editViews, scopeQuery, type Scope } from '../scope.ts'
import type { Schemas } from '../value-cells.ts'
import { AddBusDialog } from './add-bus-dialog.tsx'
import { AddFamilyDialog } from './add-family-dialog.tsx'
import { AddJointDialog } from './add-joint-dialog.tsx'
import { BusesTable } from './buses-table.tsx'
import { CascadeView } from './cascade-view.tsx'
import { DriveTrainTable } from './drive-train-table.tsx'
import { JointsTable } from './joints-table.tsx'
import { ScopeChips } from './scope-chips.tsx'
import { TableView } from './table-view.tsx'
import { TextView } from './text-view.tsx'

export interface ValueViewsProps {
  changeKey: string
  state: Pick<DraftState, 'set' | 'text' | 'textProblems' | 'saving'>
  base: MachineSet
  schemas: Schemas
  scope: Scope
  altered: { families: ReadonlySet<string>; joints: ReadonlySet<string> }
  findings: readonly Finding[]
  /** firmware versions a joint may be moved to */
  firmware: readonly string[]
  /** null: read only */
  onEdit: ((edits: Edit[]) => void) | null
  onType: ((text: string) => void) | null
  onDropText: () => void
}

/** The three views of the same values, and the switch between them. */
export function ValueViews(props: ValueViewsProps) {
  const { state, base, scope, altered, onEdit, onType } = props
  return (
    <>
      <div className="flex flex-wrap items-center gap-x-4 gap-y-2 border-b border-hairline pb-3">
        <ViewSwitch label="views of the values" views={editViews.map((view) => ({ label: view, to: scopeQuery(scope, { view }), current: scope.view === view }))} />
        <ScopeChips scope={scope} set={state.set} base={base} schemas={props.schemas} altered={altered} />
      </div>
      <p className="mt-2 text-13 text-ink-2 lg:hidden">The editor wants a screen 1024 px wide; reading and signing work here.</p>
      <div className="mt-3">
        {scope.view === 'text' ? (
          <TextView state={state} changeKey={props.changeKey} schemas={props.schemas} findings={props.findings} pointer={pointerOf(scope)} onType={onType} onDrop={props.onDropText} />
        ) : scope.family === null ? (
          <NoFamily {...props} />
        ) : scope.view === 'table' ? (
          <Tables {...props} family={scope.family} />
        ) : (
          <CascadeView set={state.set} base={base} schemas={props.schemas} family={scope.family} joint={scope.joint} onEdit={onEdit} driveTrainTo={`${scopeQuery(scope, { view: 'table' })}#drive-train`} />
        )}
      </div>
    </>
  )
}

const pointerOf = (scope: Scope) => (scope.joint ? toPointer(['joints', scope.joint]) : scope.family ? toPointer(['families', scope.family]) : null)

type Adding = 'joint' | 'family' | 'bus' | null

/** Everything of the set in tables: values, the family's joints and drive train, buses. */
function Tables({ state: { set }, base, schemas, scope, family, firmware, findings, onEdit }: ValueViewsProps & { family: string }) {
  const [adding, setAdding] = useState<Adding>(null)
  return (
    <>
      <TableView set={set} base={base} schemas={schemas} scope={scope} findings={findings} onEdit={onEdit} />
      <div className="mt-8 grid gap-8">
        <JointsTable set={set} base={base} family={family} firmware={firmware} onEdit={onEdit} onAdd={() => setAdding('joint')} />
        <DriveTrainTable key={family} set={set} base={base} family={family} onEdit={onEdit} />
        <BusesTable set={set} base={base} onEdit={onEdit} onAdd={() => setAdding('bus')} />
        {onEdit && (
          <div>
            <Button small onClick={() => setAdding('family')}>
              Add a family
            </Button>
          </div>
        )}
      </div>
      {onEdit && <AddDialogs adding={adding} onClose={() => setAdding(null)} set={set} scope={scope} firmware={firmware} onEdit={onEdit} />}
    </>
  )
}

/** A machine's first change: nothing stands in it yet. */
function NoFamily({ state: { set }, base, scope, firmware, onEdit }: ValueViewsProps) {
  const [adding, setAdding] = useState<Adding>(null)
  return (
    <>
      <EmptyState
        title="This machine has no joints yet"
        action={
          onEdit && (
            <>
              <Button onClick={() => setAdding('bus')}>Add a bus</Button>
              <Button onClick={() => setAdding('family')}>Add a family</Button>
            </>
          )
        }
      >
        Begin with a bus and a family of joints built alike, then add the joints; or write it all as text.
      </EmptyState>
      <div className="mt-6">
        <BusesTable set={set} base={base} onEdit={onEdit} onAdd={() => setAdding('bus')} />
      </div>
      {onEdit && <AddDialogs adding={adding} onClose={() => setAdding(null)} set={set} scope={scope} firmware={firmware} onEdit={onEdit} />}
    </>
  )
}

function AddDialogs({ adding, onClose, set, scope, firmware, onEdit }: { adding: Adding; onClose: () => void; set: MachineSet; scope: Scope; firmware: readonly string[]; onEdit: (edits: Edit[]) => void }) {
  const navigate = useNavigate()
  const go = (over: Partial<Scope>) => void navigate(scopeQuery(scope, { view: 'table', ...over }), { preventScrollReset: true })
  if (adding === 'joint') return <AddJointDialog set={set} family={scope.family} firmware={firmware} onEdit={onEdit} onClose={onClose} onAdded={(joint) => go({ joint })} />
  if (adding === 'family') return <AddFamilyDialog set={set} onEdit={onEdit} onClose={onClose} onAdded={(family) => go({ family, joint: null })} />
  return adding === 'bus' ? <AddBusDialog set={set} onEdit={onEdit} onClose={onClose} /> : null
}
