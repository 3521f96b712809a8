import type { DiffGroup, DiffRow } from '../../../../shared/contract/reviews.ts'
import { DecimalText } from '../../../components/ui/decimal-text.tsx'
import { rowProps, type RowTools } from '../row-tools.ts'
import { sectionsOf } from '../sections-of.ts'
import { DiffList } from './diff-list.tsx'
import { BytesChange, OriginChange, percentText, RegisterWords, sideText } from './diff-side.tsx'
import { EffectCell } from './effect-cell.tsx'
import { RowEnd } from './row-end.tsx'

export interface DiffTableProps {
  group: DiffGroup
  nameOf: (joint: string) => string
  baseVersion: string | null
  /** "Knee family" */
  title: string
  tools: RowTools
}

const places = (rows: readonly DiffRow[], of: (r: DiffRow) => string) => Math.max(0, ...rows.map(of).map((t) => (t.includes('.') && /^[\d\u2212.\u00a0]+$/.test(t) ? t.length - t.indexOf('.') : 0)))

/** What alters, parameter by parameter: released and candidate value, change, register, bytes, what it does alone. Narrow screens read it as a list. */
export function DiffTable({ group, nameOf, baseVersion, title, tools }: DiffTableProps) {
  const sections = sectionsOf(group, title, nameOf)
  const rows = sections.flatMap((s) => s.rows)
  const decimals = [places(rows, (r) => sideText(r.before)), places(rows, (r) => sideText(r.after))] as const
  return (
    <>
      <div className="table-frame hidden md:block">
        <table className="table [&_td]:!px-[5px] [&_th]:!px-[5px]" aria-label={`what alters in the ${title}`}>
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
              <th scope="col">{tools.effects ? 'Effect of this value alone' : 'Origin'}</th>
              <th scope="col" className="no-print">
                <span className="sr-only">Comments and reading</span>
              </th>
            </tr>
          </thead>
          {sections.map((s) => (
            <tbody key={s.title}>
              <tr>
                <th scope="rowgroup" colSpan={9} className="!border-hairline !pt-3 !font-normal">
                  {s.title}
                </th>
              </tr>
              {s.rows.map((r) => (
                <Row key={r.key} row={r} of={s.of} decimals={decimals} tools={tools} />
              ))}
            </tbody>
          ))}
        </table>
      </div>
      <DiffList sections={sections} tools={tools} />
    </>
  )
}

function Row({ row, of, decimals: [before, after], tools }: { row: DiffRow; of: string; decimals: readonly [number, number]; tools: RowTools }) {
  return (
    <tr {...rowProps(tools, row)} className="scroll-my-16">
      <td role="rowheader" className="whitespace-nowrap">
        {row.title}
      </td>
      <td className="text-13 whitespace-nowrap text-ink-2">{row.unit}</td>
      <td className="end">{aligned(sideText(row.before), before)}</td>
      <td className="end font-medium text-brass">{aligned(sideText(row.after), after)}</td>
      <td className="end num text-13">{percentText(row)}</td>
      <td>
        <RegisterWords row={row} />
      </td>
      <td>
        <BytesChange row={row} />
      </td>
      <td>{tools.effects ? <EffectCell effect={tools.effects.get(row.key)} row={row} /> : <OriginChange row={row} />}</td>
      <td className="no-print">
        <RowEnd row={{ ...row, title: `${row.title}, ${of}` }} tools={tools} />
      </td>
    </tr>
  )
}

const aligned = (text: string, after: number) => (/^[\d\u2212.\u00a0]+$/.test(text) ? <DecimalText text={text} places={after} /> : <span className="num">{text}</span>)
