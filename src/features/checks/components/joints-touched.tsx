import type { CheckView, JointCheck } from '../../../../shared/contract/checks.ts'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { VerdictMark } from '../../../components/ui/verdict-mark.tsx'
import { count } from '../../../lib/format.ts'
import { alike } from '../figures.ts'
import { BeforeAfter } from './before-after.tsx'

export interface JointsTouchedProps {
  check: CheckView
  nameOf: (joint: string) => string
}

const smallest = (j: JointCheck, side: 'candidate' | 'released', figure: 'phaseMarginDeg' | 'gainMarginDb'): string | null => {
  const values = Object.values(j[side]?.loops ?? {}).flatMap((l) => l[figure] ?? [])
  return values.length === 0 ? null : Math.min(...values).toFixed(1)
}

/** What the change does to every joint that it touches, joints alike in one line: a family's value reaches many, a joint's own value one. */
export function JointsTouched({ check, nameOf }: JointsTouchedProps) {
  const groups = alike(check.joints.filter((j) => j.touched))
  if (groups.length === 0) return null
  const touched = groups.reduce((n, g) => n + g.length, 0)
  return (
    <section className="mt-4" aria-label="every joint touched">
      <SectionHeading level={3} aux={`${touched} of ${check.joints.length}`}>
        Every joint touched
      </SectionHeading>
      <table className="table table-dense mt-1 text-13" aria-label="joints touched, smallest margins before and after">
        <tbody>
          {groups.map(([j, ...others]) => (
            <tr key={j.joint}>
              <td role="rowheader" className="!px-0 !whitespace-normal" title={[j, ...others].map((o) => nameOf(o.joint)).join(', ')}>
                {nameOf(j.joint)}
                {others.length > 0 && <span className="text-ink-2"> and {count(others.length, 'alike', 'alike')}</span>}
              </td>
              <td className="!px-2">{j.candidate ? <VerdictMark verdict={j.candidate.verdict} size={14} /> : <span className="text-oxide">not computed</span>}</td>
              <td className="end num !px-0">
                {j.candidate && (
                  <>
                    <BeforeAfter before={smallest(j, 'released', 'phaseMarginDeg')} after={smallest(j, 'candidate', 'phaseMarginDeg') ?? '–'} />°
                  </>
                )}
              </td>
              <td className="end num !pr-0">
                {j.candidate && (
                  <>
                    <BeforeAfter before={smallest(j, 'released', 'gainMarginDb')} after={smallest(j, 'candidate', 'gainMarginDb') ?? '–'} /> <span className="unit">dB</span>
                  </>
                )}
              </td>
            </tr>
          ))}
        </tbody>
      </table>
    </section>
  )
}
