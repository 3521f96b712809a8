import type { JointCheck } from '../../../../shared/contract/checks.ts'
import { Table, type Column } from '../../../components/ui/table.tsx'
import { VerdictMark } from '../../../components/ui/verdict-mark.tsx'
import { BeforeAfter } from './before-after.tsx'

export interface JointVerdictsProps {
  joints: readonly JointCheck[]
  nameOf: (joint: string) => string
  familyOf: (joint: string) => string
  chosen: string | null
  onChoose: (joint: string) => void
}

/** Every joint of the machine under the check, the touched ones first; one is chosen for the report. */
export function JointVerdicts({ joints, nameOf, familyOf, chosen, onChoose }: JointVerdictsProps) {
  const columns: Column<JointCheck>[] = [
    { key: 'joint', head: 'Joint', cell: (j) => nameOf(j.joint), sortBy: (j) => nameOf(j.joint) },
    { key: 'family', head: 'Family', cell: (j) => familyOf(j.joint), className: 'text-ink-2', sortBy: (j) => familyOf(j.joint) },
    { key: 'verdict', head: 'Verdict', cell: (j) => (j.candidate ? <VerdictMark verdict={j.candidate.verdict} size={15} /> : <span className="text-oxide">not computed</span>), sortBy: (j) => j.candidate?.verdict ?? null },
    { key: 'rho', head: 'ρ', align: 'end', cell: (j) => <BeforeAfter before={j.touched && j.released ? j.released.rho.toFixed(5) : null} after={j.candidate?.rho.toFixed(5) ?? null} className="num" />, sortBy: (j) => j.candidate?.rho ?? null },
    { key: 'touched', head: 'In this change', cell: (j) => (j.touched ? 'touched' : <span className="text-ink-2">as released</span>), sortBy: (j) => (j.touched ? 0 : 1) },
  ]
  const rows = joints.toSorted((a, b) => Number(b.touched) - Number(a.touched))
  return <Table label="joints under the check" dense rows={rows} columns={columns} rowKey={(j) => j.joint} onOpen={(j) => onChoose(j.joint)} chosen={(j) => j.joint === chosen} empty="There is no joint yet." />
}
