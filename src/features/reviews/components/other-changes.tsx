import type { ReactNode } from 'react'
import type { DiffView, FieldRow, Marked } from '../../../../shared/contract/reviews.ts'
import { Arrow } from '../../../components/ui/arrow.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { content } from '../field-content.ts'
import { rowProps, type RowTools } from '../row-tools.ts'
import { EffectCell } from './effect-cell.tsx'
import { GroupRead } from './group-read.tsx'
import { RowEnd } from './row-end.tsx'

export interface OtherChangesProps {
  diff: DiffView
  nameOf: { joint: (key: string) => string; family: (key: string) => string; bus: (key: string) => string }
  /** symbol, words and unit of a drive train's letter */
  letterOf: (letter: string) => { symbol: ReactNode; words: string; unit: string }
  tools: RowTools
  onReadAll: (rows: readonly Marked[]) => void
}

/** What alters beside values: joints that come and go, drive trains, families, buses. */
export function OtherChanges({ diff, nameOf, letterOf, tools, onReadAll }: OtherChangesProps) {
  const part = (title: string, aux: string | undefined, rows: readonly Shown[]) => (
    <section key={title} className="mt-6">
      <SectionHeading aux={aux} actions={<GroupRead rows={rows.map((r) => r.row)} tools={tools} onReadAll={onReadAll} what={title} />}>
        {title}
      </SectionHeading>
      <Rows label={title} rows={rows} tools={tools} />
    </section>
  )
  const field = (row: FieldRow): Shown => ({ row, title: fieldWords[row.field] ?? row.field, head: fieldWords[row.field] ?? row.field, value: <BeforeAfter row={row} unit={fieldUnits[row.field] ?? ''} /> })
  return (
    <>
      {diff.joints.length > 0 &&
        part('Joints that come and go', undefined, diff.joints.map((row): Shown => ({ row, title: nameOf.joint(row.joint), head: nameOf.joint(row.joint), value: <span className={row.is === 'removed' ? 'text-oxide' : ''}>{row.is}</span> })))}
      {diff.driveTrains.map(({ family, rows }) =>
        part(
          `Drive train of the ${nameOf.family(family)} family`,
          'the model the check goes by; no register holds it',
          rows.map((row): Shown => {
            const l = letterOf(row.field)
            return { row, title: l.words || row.field, head: <>{l.symbol} <span className="text-13 text-ink-2">{l.words}</span></>, value: <BeforeAfter row={row} unit={l.unit} /> }
          }),
        ),
      )}
      {diff.families.map(({ family, rows }) => part(`${nameOf.family(family)} family itself`, 'its name, and values that no joint of it takes', rows.map(field)))}
      {diff.buses.map(({ bus, rows }) => part(`Bus ${nameOf.bus(bus)}`, undefined, rows.map(field)))}
    </>
  )
}

const fieldWords: Record<string, string> = { name: 'name', bitRate: 'bit rate', supply: 'supply', pullUp: 'pull-up', capacitance: 'capacitance', pollingRate: 'polling rate', bytesPerTransaction: 'bytes a poll', otherDevices: 'other devices' }
const fieldUnits: Record<string, string> = { bitRate: 'bit/s', supply: 'V', pullUp: 'Ω', capacitance: 'F', pollingRate: 'Hz' }

interface Shown {
  row: Marked
  title: string
  head: ReactNode
  value: ReactNode
}

const BeforeAfter = ({ row, unit }: { row: FieldRow; unit: string }) => (
  <>
    <span className="num">{content(row.before)}</span>
    <Arrow />
    <span className="num font-medium text-brass">{content(row.after)}</span> <span className="unit text-13">{unit}</span>
  </>
)

function Rows({ label, rows, tools }: { label: string; rows: readonly Shown[]; tools: RowTools }) {
  const effects = tools.effects !== null && rows.some((r) => tools.effects!.has(r.row.key))
  return (
    <div className="table-frame">
      <table className="table table-dense mt-1" aria-label={label}>
        <tbody>
          {rows.map(({ row, title, head, value }) => (
            <tr key={row.key} {...rowProps(tools, row)} className="scroll-my-16">
              <td role="rowheader" className="!whitespace-normal">
                {head}
              </td>
              <td>
                {value}
                {effects && <div className="md:hidden"><EffectCell effect={tools.effects?.get(row.key)} /></div>}
              </td>
              {effects && (
                <td className="hidden w-[330px] md:table-cell">
                  <EffectCell effect={tools.effects?.get(row.key)} />
                </td>
              )}
              <td className="no-print w-[76px]">
                <RowEnd row={{ ...row, title }} tools={tools} />
              </td>
            </tr>
          ))}
        </tbody>
      </table>
    </div>
  )
}
