import { useSuspenseQuery } from '@tanstack/react-query'
import { useState } from 'react'
import { useNavigate } from 'react-router'
import { paths } from '../app/paths.ts'
import { PageHead } from '../components/layout/page-head.tsx'
import { Button } from '../components/ui/button.tsx'
import { EmptyState } from '../components/ui/empty-state.tsx'
import { LineDialog } from '../features/firmware/components/line-dialog.tsx'
import { LineSection } from '../features/firmware/components/line-section.tsx'
import { firmwareLinesQuery } from '../features/firmware/queries.ts'
import { holds, useMe } from '../lib/me.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = () => queryClient.ensureQueryData(firmwareLinesQuery)

export function Component() {
  const lines = useSuspenseQuery(firmwareLinesQuery).data
  const me = useMe()
  const navigate = useNavigate()
  const [making, setMaking] = useState(false)
  const mayMake = Object.keys(me.acts).some((machine) => holds(me, 'draft firmware', machine))
  const make = mayMake ? <Button kind={lines.length === 0 ? 'primary' : 'plain'} onClick={() => setMaking(true)}>New firmware line…</Button> : null
  return (
    <>
      <PageHead title="Firmware" actions={lines.length > 0 ? make : null}>
        firmware lines, their versions, and what each version keeps in its registers
      </PageHead>
      {lines.length === 0 ? (
        <EmptyState title="There is no firmware line yet." action={make}>
          A line stands for one firmware product. Its versions say which parameters a board holds, and where.
        </EmptyState>
      ) : (
        lines.map((line) => <LineSection key={line.key} line={line} onDrafted={(v) => void navigate(`${paths.firmwareVersion(v.line, v.version)}?view=schema`)} />)
      )}
      {making && <LineDialog onClose={() => setMaking(false)} />}
    </>
  )
}
