import type { DiffGroup, DiffRow, RowEffect } from '../../../../shared/contract/reviews.ts'
import { byLaw } from '../../../../shared/parameters/laws.ts'
import { Arrow } from '../../../components/ui/arrow.tsx'
import { DecimalText } from '../../../components/ui/decimal-text.tsx'
import type { Reading } from '../use-reading.ts'
import { BytesChange, OriginChange, percentText, RegisterWords, sideText } from './diff-side.tsx'
import { EffectCell } from './effect-cell.tsx'
import { ReadBox } from './read-box.tsx'

export interface DiffTableProps {
  group: DiffGroup
  nameOf: (joint: string) => string
  baseVersion: string | null
  label: string
  reading: Reading | null
  /** what each row does alone, by its key */
  effects: ReadonlyMap<string, RowEffect>
}

interface Section {
  title: string
  rows: DiffRow[]
}

/** Settings of the joint first, then its values by law, then what single joints have of their own. */
function sectionsOf(group: DiffGroup, nameOf: (joint: string) => string): Section[] {
  const settings = group.rows.filter((r) => r.role === null && r.register === null)
  const values = group.rows.filter((r) => !settings.includes(r))
  return [
    ...(settings.length > 0 ? [{ title: 'place and firmware', rows: settings }] : []),
    ...byLaw(values).map(({ law, things }) => ({ title: law, rows: things })),
    ...group.own.map(({ joint, rows }) => ({ title: ownTitle(nameOf(joint), rows), rows })),
  ]
}

function ownTitle(name: string, rows: readonly DiffRow[]): string {
  if (rows.every((r) => r.before?.origin === 'joint' && r.after && r.after.origin !== 'joint')) return `${name} gives up its own ${rows.length === 1 ? 'value' : 'values'}`
  if (rows.every((r) => r.after?.origin === 'joint')) return `${name} has ${rows.length === 1 ? 'a value' : 'values'} of its own`
  return `${name} differs`
}

const places = (rows: readonly DiffRow[], of: (r: DiffRow) => string) => Math.max(0, ...rows.map(of).map((t) => (t.includes('.') && /^[\d\u2212.\u00a0]+$/.test(t) ? t.length - t.indexOf('.') : 0)))

/** What alters, parameter by parameter: released and candidate value, change, register, bytes. Narrow screens read it as a list. */
export function DiffTable({ group, nameOf, baseVersion, label, reading, effects }: DiffTableProps) {
  const sections = sectionsOf(group, nameOf)
  const rows = sections.flatMap((s) => s.rows)
  const marks = reading?.mark != null
  const [before, after] = [places(rows, (r) => sideText(r.before)), places(rows, (r) => sideText(r.after))]
  return (
    <>
      <div className="table-frame hidden md:block">
        <table className="table" aria-label={label}>
          <thead>
            <tr>
              <th scope="col">Parameter</th>
              <th scope="col">Unit</th>
              <th scope="col" className="end">
                Released
                {baseVersion && <span className="num block font-normal">{baseVersion}</span>}
              </th>
              <th scope="col" className="end">Candidate</th>
              <th scope="col" className="end">
                Change<span className="block font-normal">%</span>
              </th>
              <th scope="col">Register</th>
              <th scope="col">Bytes before and after</th>
              <th scope="col">Effect of this value alone</th>
              {marks && <th scope="col">Read</th>}
            </tr>
          </thead>
          {sections.map((s) => (
            <tbody key={s.title}>
              <tr>
                <th scope="rowgroup" colSpan={marks ? 9 : 8} className="!border-hairline !pt-3 !font-normal">
                  {s.title}
                </th>
              </tr>
              {s.rows.map((r) => (
                <tr key={r.key}>
                  <td role="rowheader">
                    {r.title}
                  </td>
                  <td className="text-13 whitespace-nowrap text-ink-2">{r.unit}</td>
                  <td className="end">{aligned(sideText(r.before), before)}</td>
                  <td className="end font-medium text-brass">{aligned(sideText(r.after), after)}</td>
                  <td className="end num text-13">{percentText(r)}</td>
                  <td>
                    <RegisterWords row={r} />
                  </td>
                  <td>
                    <BytesChange row={r} />
                  </td>
                  <td>
                    <OriginChange row={r} /> <EffectCell effect={effects.get(r.key)} nameOf={nameOf} alone={group.joints.length === 1} />
                  </td>
                  {marks && (
                    <td className="!pr-0">
                      <ReadBox row={r} title={r.title} reading={reading} />
                    </td>
                  )}
                </tr>
              ))}
            </tbody>
          ))}
        </table>
      </div>
      <div className="md:hidden">
        {sections.map((s) => (
          <section key={s.title} className="mt-3">
            <h4 className="border-b border-hairline text-13 text-ink-2">{s.title}</h4>
            <ul>
              {s.rows.map((r) => (
                <li key={r.key} className="border-b border-hairline py-2">
                  <p className="flex justify-between gap-2">
                    <span>{r.title}</span>
                    {percentText(r) && (
                      <span className="num text-13">
                        {percentText(r)}
                        <span className="unit"> %</span>
                      </span>
                    )}
                  </p>
                  <p>
                    <span className="num">{sideText(r.before)}</span>
                    <Arrow />
                    <span className="num font-medium text-brass">{sideText(r.after)}</span> <span className="unit text-13">{r.unit}</span>
                  </p>
                  <p className="flex flex-wrap gap-x-3 text-13">
                    <RegisterWords row={r} />
                    <BytesChange row={r} />
                    <OriginChange row={r} />
                  </p>
                  <p className="flex items-center justify-between gap-3">
                    <EffectCell effect={effects.get(r.key)} nameOf={nameOf} alone={group.joints.length === 1} />
                    <ReadBox row={r} title={r.title} reading={reading} />
                  </p>
                </li>
              ))}
            </ul>
          </section>
        ))}
      </div>
    </>
  )
}

const aligned = (text: string, after: number) => (/^[\d\u2212.\u00a0]+$/.test(text) ? <DecimalText text={text} places={after} /> : <span className="num">{text}</span>)
