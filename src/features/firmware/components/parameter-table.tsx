import type { FirmwareParameter } from '../../../../shared/contract/firmware.ts'
import { useUrlSort } from '../../../components/layout/use-url-state.ts'
import { valueText } from '../../../components/layout/value-text.ts'
import { HexAddress } from '../../../components/ui/hex-address.tsx'
import { HelpButton } from '../../../components/ui/help-button.tsx'
import { Table } from '../../../components/ui/table.tsx'
import type { Column } from '../../../components/ui/table.tsx'

/** The first three of a list, and how many more there are. */
const choices = (list: readonly (string | number)[]) => (list.length <= 4 ? list.join(', ') : `${list.slice(0, 3).join(', ')} and ${list.length - 3} more`)

const allowed = (p: FirmwareParameter): string | null =>
  p.choices ? choices(p.choices)
  : p.minimum === null && p.maximum === null ? null
  : `${p.minimum === null ? '' : valueText(p.minimum)} … ${p.maximum === null ? '' : valueText(p.maximum)}`

const columns: Column<FirmwareParameter>[] = [
  {
    key: 'register',
    head: 'Register',
    className: 'whitespace-nowrap font-normal',
    sortBy: (p) => p.register?.address ?? null,
    cell: (p) =>
      p.register === null ? (
        <span className="text-13 font-normal text-ink-2">constant</span>
      ) : (
        <span className="font-normal">
          <HexAddress address={p.register.address} />
          {p.register.bit !== null && <span className="num text-12 text-ink-2"> bit {p.register.width === 1 || p.register.width === null ? p.register.bit : `${p.register.bit}–${p.register.bit + p.register.width - 1}`}</span>}
        </span>
      ),
  },
  {
    key: 'parameter',
    head: 'Parameter',
    className: 'whitespace-nowrap',
    sortBy: (p) => p.title,
    cell: (p) => (
      <>
        <span className="font-medium">{p.title || p.name}</span> <span className="num text-12 text-ink-2">{p.name}</span>
      </>
    ),
  },
  { key: 'encoding', head: 'Encoding', className: 'num text-13', sortBy: (p) => p.register?.encoding ?? null, cell: (p) => p.register?.encoding ?? '' },
  { key: 'access', head: 'Access', className: 'text-13', sortBy: (p) => p.register?.access ?? null, cell: (p) => p.register && { rw: '', ro: 'read only', wo: 'written only' }[p.register.access] },
  { key: 'default', head: 'Default', decimal: (p) => (p.default === null ? null : valueText(p.default)) },
  { key: 'unit', head: 'Unit', className: 'text-ink-2', cell: (p) => p.unit },
  { key: 'allowed', head: 'Allowed', className: 'num text-13 whitespace-nowrap text-ink-2', cell: (p) => <span title={p.choices?.join(', ')}>{allowed(p)}</span> },
  { key: 'role', head: 'Role', className: 'num text-13 whitespace-nowrap', sortBy: (p) => p.role, cell: (p) => <>{p.role} {p.role && <HelpButton topic={`role:${p.role}`} about={p.title || p.name} />}{p.boardBound && <span className="font-sans text-ink-2"> board-bound</span>}</> },
]

export interface ParameterTableProps {
  parameters: readonly FirmwareParameter[]
  chosen: string
  onChoose: (parameter: string) => void
}

export function ParameterTable({ parameters, chosen, onChoose }: ParameterTableProps) {
  const [sort, setSort] = useUrlSort()
  return <Table dense className="max-xl:overflow-x-auto" label="parameters" rows={parameters} columns={columns} rowKey={(p) => p.name} chosen={(p) => p.name === chosen} onOpen={(p) => onChoose(p.name)} sort={sort} onSort={setSort} empty="No parameter fits the filter." />
}
