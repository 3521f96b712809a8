import type { MachineView } from '../../../../shared/contract/machines.ts'
import { paths } from '../../../app/paths.ts'
import { Num } from '../../../components/ui/num.tsx'
import { Table } from '../../../components/ui/table.tsx'
import type { Column } from '../../../components/ui/table.tsx'

type Family = MachineView['familyList'][number]

const columns: Column<Family>[] = [
  { key: 'family', head: 'Family', cell: (f) => f.name },
  { key: 'joints', head: 'Joints', align: 'end', className: 'num', cell: (f) => f.joints },
  { key: 'drive', head: 'Drive train', align: 'end', className: 'num', cell: (f) => (f.driveTrainNumber === null ? <Num value={null} /> : `d${f.driveTrainNumber}`) },
]

export const FamilyList = ({ machine }: { machine: MachineView }) => (
  <Table label="families" rows={machine.familyList} columns={columns} rowKey={(f) => f.key} rowTo={(f) => paths.family(machine.key, f.key)} empty="There is no family yet." />
)
