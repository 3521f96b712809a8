import type { BusView, Tap } from '../../../../shared/contract/machines.ts'
import { paths } from '../../../app/paths.ts'
import { FindingMark } from '../../../components/ui/finding-mark.tsx'
import { HexAddress } from '../../../components/ui/hex-address.tsx'
import { Table } from '../../../components/ui/table.tsx'
import type { Column } from '../../../components/ui/table.tsx'
import { TextLink } from '../../../components/ui/text-link.tsx'

/** What answers on the bus, in address order. */
export function TapTable({ bus }: { bus: BusView }) {
  const columns: Column<Tap>[] = [
    { key: 'address', head: 'Address', width: '6rem', cell: (t) => <HexAddress address={t.address} /> },
    { key: 'name', head: 'What answers', cell: (t) => (t.joint === null ? t.name : <TextLink className="row-link" to={paths.joint(bus.machine, t.joint)}>{t.name}</TextLink>) },
    { key: 'kind', head: 'Kind', className: 'text-ink-2', cell: (t) => (t.joint === null ? 'other device' : 'joint') },
    {
      key: 'finding',
      head: 'Finding',
    className: 'whitespace-nowrap',
      cell: (t) => (bus.doubled.includes(t.address) ? <FindingMark level="block">two at this address</FindingMark> : t.reserved ? <FindingMark level="block">reserved address</FindingMark> : <FindingMark level="pass">alone at its address</FindingMark>),
    },
  ]
  return <Table dense label="what answers" rows={bus.taps} columns={columns} rowKey={(t) => `${t.address} ${t.joint ?? t.name}`} empty="Nothing answers on this bus yet." />
}
