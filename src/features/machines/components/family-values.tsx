import type { FamilyView } from '../../../../shared/contract/machines.ts'
import { paths } from '../../../app/paths.ts'
import { useUrlSort } from '../../../components/layout/use-url-state.ts'
import { valueText } from '../../../components/layout/value-text.ts'
import { HelpButton } from '../../../components/ui/help-button.tsx'
import { OriginMark } from '../../../components/ui/origin-mark.tsx'
import { Table } from '../../../components/ui/table.tsx'
import type { Column } from '../../../components/ui/table.tsx'
import { TextLink } from '../../../components/ui/text-link.tsx'

type FamilyValue = FamilyView['values'][number]

/** What the family gives its joints, what it leaves to the firmware, and which joints depart from it. */
export function FamilyValues({ machine, values, joints }: { machine: string; values: readonly FamilyValue[]; joints: FamilyView['joints'] }) {
  const [sort, setSort] = useUrlSort()
  const nameOf = new Map(joints.map((j) => [j.key, j.name]))
  const columns: Column<FamilyValue>[] = [
    { key: 'parameter', head: 'Parameter', className: 'whitespace-nowrap', sortBy: (v) => v.title, cell: (v) => <>{v.title} {v.role && <HelpButton topic={`role:${v.role}`} about={v.title} />}</> },
    { key: 'value', head: 'Value', decimal: (v) => valueText(v.familyValue ?? v.firmwareDefault) },
    { key: 'unit', head: 'Unit', className: 'text-ink-2', cell: (v) => v.unit },
    { key: 'origin', head: 'Origin', sortBy: (v) => (v.familyValue === null ? 0 : 1), cell: (v) => <OriginMark origin={v.familyValue === null ? 'firmware' : 'family'} /> },
    { key: 'default', head: 'Firmware default', className: 'text-13 text-ink-2', decimal: (v) => (v.firmwareDefault === null ? null : valueText(v.firmwareDefault)) },
    {
      key: 'own',
      head: 'Joints that depart',
      sortBy: (v) => -v.own.length,
      cell: (v) => (
        <span className="flex min-w-[20rem] flex-wrap gap-x-3">
          {v.own.map((o) => (
            <span key={o.joint} className="text-13">
              <TextLink to={paths.joint(machine, o.joint)}>{nameOf.get(o.joint) ?? o.joint}</TextLink> <span className="num">{valueText(o.value)}</span>
            </span>
          ))}
        </span>
      ),
    },
  ]
  return <Table dense className="max-xl:overflow-x-auto" label="values" rows={values} columns={columns} rowKey={(v) => v.name} sort={sort} onSort={setSort} empty="No value fits the filter." />
}
