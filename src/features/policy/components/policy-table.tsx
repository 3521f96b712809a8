import type { PolicyContent } from '../../../../shared/contract/policy.ts'
import { Arrow } from '../../../components/ui/arrow.tsx'
import { Num } from '../../../components/ui/num.tsx'
import { Table } from '../../../components/ui/table.tsx'
import type { Column } from '../../../components/ui/table.tsx'
import { limitAt, policyFields } from '../policy-fields.ts'
import type { Limit, PolicyField } from '../policy-fields.ts'

export interface PolicyTableProps {
  label: string
  content: PolicyContent
  /** What stood before: limits that differ show both. */
  before?: PolicyContent
}

/** Every limit of a policy; compared with another, what differs stands out. */
export function PolicyTable({ label, content, before }: PolicyTableProps) {
  const differs = (f: PolicyField) => before !== undefined && limitAt(before, f.pointer) !== limitAt(content, f.pointer)
  const columns: Column<PolicyField>[] = [
    { key: 'name', head: 'Figure', cell: (f) => f.name },
    { key: 'stage', head: 'Limit', className: 'text-ink-2', cell: (f) => f.stage },
    {
      key: 'value',
      head: 'Value',
      align: 'end',
      cell: (f) => (
        <>
          {differs(f) && (
            <>
              <Shown limit={limitAt(before!, f.pointer)} className="text-ink-2" /> <Arrow />{' '}
            </>
          )}
          <Shown limit={limitAt(content, f.pointer)} className={differs(f) ? 'font-medium text-brass' : ''} unit={f.unit} />
        </>
      ),
    },
  ]
  return <Table dense label={label} rows={policyFields} columns={columns} rowKey={(f) => f.pointer} chosen={differs} />
}

function Shown({ limit, className, unit }: { limit: Limit | undefined; className: string; unit?: string }) {
  if (typeof limit === 'number') return <Num className={className} value={String(limit)} unit={unit} />
  return <span className={className}>{limit ?? 'no rule'}</span>
}
