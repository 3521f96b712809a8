import type { PolicyContent } from '../../../../shared/contract/policy.ts'
import { Arrow } from '../../../components/ui/arrow.tsx'
import { Num } from '../../../components/ui/num.tsx'
import { Table } from '../../../components/ui/table.tsx'
import type { Column } from '../../../components/ui/table.tsx'
import { limitAt, policyFields } from '../policy-fields.ts'
import type { PolicyField } from '../policy-fields.ts'

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
              <Num className="text-ink-2" value={String(limitAt(before!, f.pointer))} /> <Arrow />{' '}
            </>
          )}
          <Num className={differs(f) ? 'font-medium text-brass' : ''} value={String(limitAt(content, f.pointer))} unit={f.unit} />
        </>
      ),
    },
  ]
  return <Table dense label={label} rows={policyFields} columns={columns} rowKey={(f) => f.pointer} chosen={differs} />
}
