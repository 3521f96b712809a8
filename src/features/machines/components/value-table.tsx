import type { ParameterValue } from '../../../../shared/contract/machines.ts'
import { valueText } from '../../../components/layout/value-text.ts'
import { useUrlSort } from '../../../components/layout/use-url-state.ts'
import { HexAddress } from '../../../components/ui/hex-address.tsx'
import { HelpButton } from '../../../components/ui/help-button.tsx'
import { Num } from '../../../components/ui/num.tsx'
import { OriginMark } from '../../../components/ui/origin-mark.tsx'
import { Table } from '../../../components/ui/table.tsx'
import type { Column } from '../../../components/ui/table.tsx'
import { formatHex, formatNumber } from '../../../lib/format.ts'

const range = (v: ParameterValue) => (v.minimum === null && v.maximum === null ? null : `${v.minimum === null ? '' : valueText(v.minimum)} … ${v.maximum === null ? '' : valueText(v.maximum)}`)

const isAddress = (v: ParameterValue) => v.role === 'bus.address'

/** What the value stands over: the family's, or the firmware's default. A bus address stands over nothing: each joint has its own. */
const under = (v: ParameterValue): string | null =>
  isAddress(v) ? null
  : v.origin === 'joint' && v.familyValue !== null ? `family ${valueText(v.familyValue)}`
  : v.origin !== 'firmware' && v.firmwareDefault !== null && v.familyValue === null ? `firmware ${valueText(v.firmwareDefault)}`
  : null

const columns: Column<ParameterValue>[] = [
  {
    key: 'parameter',
    head: 'Parameter',
    className: 'whitespace-nowrap',
    sortBy: (v) => v.title,
    cell: (v) => (
      <span title={v.description}>
        {v.title} {v.role && <HelpButton topic={`role:${v.role}`} about={v.title} />}
        {v.boardBound && <span className="text-12 font-normal text-ink-2"> board-bound</span>}
      </span>
    ),
  },
  { key: 'value', head: 'Value', decimal: (v) => (isAddress(v) && typeof v.value === 'number' ? formatHex(v.value) : valueText(v.value)) },
  { key: 'unit', head: 'Unit', className: 'text-ink-2', cell: (v) => v.unit },
  {
    key: 'origin',
    head: 'Origin',
    sortBy: (v) => ['firmware', 'family', 'joint'].indexOf(v.origin),
    cell: (v) => (
      <span className="whitespace-nowrap">
        <OriginMark origin={v.origin} />
        {under(v) && <span className="ml-2 text-12 text-ink-2">over {under(v)}</span>}
      </span>
    ),
  },
  { key: 'range', head: 'Allowed', align: 'end', className: 'num text-13 text-ink-2 whitespace-nowrap', cell: (v) => range(v) ?? <Num value={null} /> },
  {
    key: 'register',
    head: 'Register',
    sortBy: (v) => v.register?.address ?? null,
    className: 'whitespace-nowrap',
    cell: (v) =>
      v.register === null ? (
        <span className="text-13 text-ink-2">constant</span>
      ) : (
        <>
          <HexAddress address={v.register.address} /> <span className="num text-12 text-ink-2">{v.register.encoding}{v.register.bit !== null && ` bit ${v.register.bit}`}</span>
        </>
      ),
  },
  { key: 'bytes', head: 'Bytes', className: 'num text-13 whitespace-nowrap', cell: (v) => (v.bytes.match(/[0-9a-f]{2}/gi) ?? []).join(' ').toUpperCase() },
  {
    key: 'error',
    head: 'Rounding',
    align: 'end',
    className: 'num text-13 text-ink-2',
    sortBy: (v) => (v.errorRelative === null ? null : Math.abs(v.errorRelative)),
    cell: (v) => (v.errorRelative === null || v.errorRelative === 0 ? null : <span title={v.physical === null ? undefined : `the board holds ${valueText(v.physical)} ${v.unit}`}>{formatPercent(v.errorRelative)}</span>),
  },
]

/** Two digits; in parts per million where a percent would be all zeros. */
function formatPercent(relative: number): string {
  const percent = relative * 100
  return Math.abs(percent) < 0.001 ? `${formatNumber(relative * 1e6, { digits: 2, plus: true })} ppm` : `${formatNumber(percent, { digits: 2, plus: true })} %`
}

/** The effective values of a joint: where each comes from, where it lies in the registers, and what the board makes of it. */
export function ValueTable({ values }: { values: readonly ParameterValue[] }) {
  const [sort, setSort] = useUrlSort()
  return <Table dense className="max-xl:overflow-x-auto" label="values" rows={values} columns={columns} rowKey={(v) => v.name} sort={sort} onSort={setSort} empty="No value fits the filter." />
}
