import { useSuspenseQuery } from '@tanstack/react-query'
import { useState } from 'react'
import { useNavigate } from 'react-router'
import { paths } from '../app/paths.ts'
import { PageHead } from '../components/layout/page-head.tsx'
import { useUrlText } from '../components/layout/use-url-state.ts'
import { Button } from '../components/ui/button.tsx'
import { Checkbox } from '../components/ui/checkbox.tsx'
import { EmptyState } from '../components/ui/empty-state.tsx'
import { MachineTable } from '../features/machines/components/machine-table.tsx'
import { MakeMachineDialog } from '../features/machines/components/make-machine-dialog.tsx'
import { machinesQuery } from '../features/machines/queries.ts'
import { holds, useMe } from '../lib/me.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = () => queryClient.ensureQueryData(machinesQuery)

export function Component() {
  const machines = useSuspenseQuery(machinesQuery).data
  const me = useMe()
  const navigate = useNavigate()
  const [making, setMaking] = useState(false)
  const [retired, setRetired] = useUrlText('retired')
  const shown = machines.filter((m) => !m.retired || retired === 'shown')
  const gone = machines.filter((m) => m.retired).length
  const mayMake = holds(me, 'make machines')
  const make = mayMake ? <Button kind="primary" onClick={() => setMaking(true)}>New machine</Button> : null
  return (
    <>
      <PageHead title="Machines" actions={machines.length > 0 ? make : null}>
        robot types whose control parameters are kept here
      </PageHead>
      {machines.length === 0 ? (
        <EmptyState title="There is no machine yet." action={make}>
          {mayMake ? 'Make the first one; then a controls engineer drafts its buses, families and joints in a change.' : 'An administrator makes the first one; or you hold no role on any machine yet.'}
        </EmptyState>
      ) : (
        <>
          <MachineTable machines={shown} rowTo={(m) => paths.machine(m.key)} />
          {gone > 0 && <Checkbox className="mt-3" label={`show retired machines (${gone})`} checked={retired === 'shown'} onChange={(on) => setRetired(on ? 'shown' : '')} />}
        </>
      )}
      {making && <MakeMachineDialog onClose={() => setMaking(false)} onMade={(key) => void navigate(paths.machine(key))} />}
    </>
  )
}
