import type { ReactNode } from 'react'
import type { DiffView, Marked } from '../../../../shared/contract/reviews.ts'
import { Arrow } from '../../../components/ui/arrow.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { formatExact } from '../../../lib/format.ts'
import type { Reading } from '../use-reading.ts'
import { ReadBox } from './read-box.tsx'

export interface OtherChangesProps {
  diff: DiffView
  nameOf: { joint: (key: string) => string; family: (key: string) => string; bus: (key: string) => string }
  /** symbol, words and unit of a drive train's letter */
  letterOf: (letter: string) => { symbol: ReactNode; words: string; unit: string }
  reading: Reading | null
}

/** What alters beside values: joints that come and go, drive trains, buses. */
export function OtherChanges({ diff, nameOf, letterOf, reading }: OtherChangesProps) {
  return (
    <>
      {diff.joints.length > 0 && (
        <section className="mt-6">
          <SectionHeading>Joints that come and go</SectionHeading>
          <ul className="mt-1">
            {diff.joints.map((j) => (
              <li key={j.key} className="flex items-center gap-3 border-b border-hairline py-1">
                <span className={j.is === 'removed' ? 'text-oxide' : ''}>{`${nameOf.joint(j.joint)} is ${j.is}.`}</span>
                <span className="ml-auto">
                  <ReadBox row={j} title={`${nameOf.joint(j.joint)} ${j.is}`} reading={reading} />
                </span>
              </li>
            ))}
          </ul>
        </section>
      )}
      {diff.driveTrains.map(({ family, rows }) => (
        <section key={family} className="mt-6">
          <SectionHeading aux="the model the check goes by; no register holds it">Drive train of the {nameOf.family(family)} family</SectionHeading>
          <Rows
            label={`drive train of the ${nameOf.family(family)} family`}
            reading={reading}
            rows={rows.map((r) => {
              const l = letterOf(r.field)
              return { row: r, title: l.words || r.field, head: <>{l.symbol} <span className="text-13 text-ink-2">{l.words}</span></>, unit: l.unit, before: r.before, after: r.after }
            })}
          />
        </section>
      ))}
      {diff.buses.map(({ bus, rows }) => (
        <section key={bus} className="mt-6">
          <SectionHeading>Bus {nameOf.bus(bus)}</SectionHeading>
          <Rows label={`bus ${nameOf.bus(bus)}`} reading={reading} rows={rows.map((r) => ({ row: r, title: fieldWords[r.field] ?? r.field, head: fieldWords[r.field] ?? r.field, unit: fieldUnits[r.field] ?? '', before: r.before, after: r.after }))} />
        </section>
      ))}
      {diff.families.map(({ family, rows }) => (
        <section key={family} className="mt-6">
          <SectionHeading aux="its name, and values that no joint of it takes">{nameOf.family(family)} family itself</SectionHeading>
          <Rows label={`the ${nameOf.family(family)} family itself`} reading={reading} rows={rows.map((r) => ({ row: r, title: fieldWords[r.field] ?? r.field, head: fieldWords[r.field] ?? r.field, unit: '', before: r.before, after: r.after }))} />
        </section>
      ))}
    </>
  )
}

const fieldWords: Record<string, string> = { name: 'name', bitRate: 'bit rate', supply: 'supply', pullUp: 'pull-up', capacitance: 'capacitance', pollingRate: 'polling rate', bytesPerTransaction: 'bytes a poll', otherDevices: 'other devices' }
const fieldUnits: Record<string, string> = { bitRate: 'bit/s', supply: 'V', pullUp: 'Ω', capacitance: 'F', pollingRate: 'Hz' }

interface Row {
  row: Marked
  /** plain words, for the mark */
  title: string
  head: ReactNode
  unit: string
  before: string | null
  after: string | null
}

function Rows({ label, rows, reading }: { label: string; rows: readonly Row[]; reading: Reading | null }) {
  return (
    <table className="table table-dense mt-1" aria-label={label}>
      <tbody>
        {rows.map((r) => (
          <tr key={r.row.key}>
            <td role="rowheader" className="!whitespace-normal">
              {r.head}
            </td>
            <td>
              <span className="num">{content(r.before)}</span>
              <Arrow />
              <span className="num font-medium text-brass">{content(r.after)}</span> <span className="unit text-13">{r.unit}</span>
            </td>
            <td className="end !pr-0">
              <ReadBox row={r.row} title={r.title} reading={reading} />
            </td>
          </tr>
        ))}
      </tbody>
    </table>
  )
}

/** A stored value as text: a quantity with its bounds in brackets. */
export function content(text: string | null): string {
  if (text === null) return 'none'
  try {
    const value = JSON.parse(text) as unknown
    if (typeof value === 'object' && value !== null && 'value' in value && 'low' in value && 'high' in value) {
      const q = value as { value: number; low: number; high: number }
      return `${formatExact(String(q.value))} (${formatExact(String(q.low))} to ${formatExact(String(q.high))})`
    }
    if (Array.isArray(value)) return value.length === 0 ? 'none' : value.map((v) => (typeof v === 'object' && v !== null && 'name' in v ? String((v as { name: unknown }).name) : JSON.stringify(v))).join(', ')
    return typeof value === 'number' ? formatExact(String(value)) : String(value)
  } catch {
    return text
  }
}
