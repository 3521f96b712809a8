import type { ReactNode } from 'react'
import type { ComparedJoints, ComparisonView } from '../../../../shared/contract/comparisons.ts'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { count } from '../../../lib/format.ts'
import { GroupRegisters } from './group-registers.tsx'
import { GroupValues } from './group-values.tsx'

export type CompareBy = 'value' | 'register' | 'text'

export interface ComparisonProps {
  view: ComparisonView
  by: CompareBy
  /** the two texts side by line */
  text: ReactNode
}

/** Two sides, by value, by register or as text; joints that differ alike stand together. */
export function Comparison({ view, by, text }: ComparisonProps) {
  if (by === 'text') return text
  const ownAlone = view.groups.filter((g) => by === 'value' && g.only === null && g.settings.length + g.values.length + g.driveTrain.length === 0)
  const told = view.groups.filter((g) => !ownAlone.includes(g))
  return (
    <div className="grid grid-cols-[minmax(0,1fr)] gap-8">
      {view.groups.length === 0 && <p className="text-16">The two are the same, value by value and byte by byte.</p>}
      {told.map((group) => (
        <Group key={`${group.only ?? ''} ${group.joints.map((j) => `${j.key} ${j.keyB}`).join(' ')}`} view={view} group={group} by={by} />
      ))}
      {ownAlone.length > 0 && (
        <p className="text-13 text-ink-2">The same values; the images differ in registers alone: {ownAlone.flatMap((g) => g.joints.map((j) => j.name)).join(', ')}.</p>
      )}
      {view.same.length > 0 && view.groups.length > 0 && (
        <p className="text-13 text-ink-2">
          The same on both sides: {view.same.map((j) => j.name).join(', ')}.
        </p>
      )}
    </div>
  )
}

function Group({ view, group, by }: { view: ComparisonView; group: ComparedJoints; by: CompareBy }) {
  const id = `group-${group.joints[0].key}`
  const counted = by === 'value' ? count(group.settings.length + group.values.length + group.driveTrain.length, 'difference') : count(group.registers.length + group.own.length, 'register')
  return (
    <section aria-labelledby={id} className="min-w-0">
      <SectionHeading id={id} aux={group.only ? undefined : counted}>
        {group.joints.map((j) => (j.key === j.keyB ? j.name : `${j.key} against ${j.keyB}`)).join(', ')}
      </SectionHeading>
      {group.only ? (
        <p className="mt-1 text-13 text-ink-2">{group.joints.length === 1 ? 'Stands' : 'Stand'} in {(group.only === 'a' ? view.a : view.b).label} alone.</p>
      ) : by === 'value' ? (
        <GroupValues group={group} />
      ) : (
        <GroupRegisters group={group} />
      )}
    </section>
  )
}
