import type { FirmwareComparisonView } from '../../../../shared/contract/firmware.ts'
import type { ParameterChange, SchemaAspect } from '../../../../shared/registers/compare-schemas.ts'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { Table, type Column } from '../../../components/ui/table.tsx'
import { count } from '../../../lib/format.ts'

/** What an aspect that differs is called. */
const words: Record<SchemaAspect, string> = {
  place: 'moved', encoding: 'encoded anew', scale: 'rescaled', unit: 'in another unit', bounds: 'other bounds', default: 'another default', access: 'other access', values: 'other members', role: 'another role', kind: 'another type',
}

/** A place that begins where it did has another width. */
const wordOf = ({ aspect, before, after }: ParameterChange['aspects'][number]) => (aspect === 'place' && firstAddress(before) === firstAddress(after) ? 'wider or narrower' : words[aspect])
const firstAddress = (place: string) => /^0x[0-9A-F]+/i.exec(place)?.[0] ?? place

/** "0.01·raw + 0" without the part that adds nothing. */
const plain = (text: string) => text.replace(/ \+ 0$/, '')

const settingWords: Record<string, string> = { layoutId: 'layout id', writeGaps: 'gaps written', byteOrder: 'byte order', addressWidth: 'address width', loadAddress: 'load address', release: 'release number' }

const order: readonly ParameterChange['kind'][] = ['changed', 'added', 'removed']
const headings = { changed: 'Changed', added: 'Added', removed: 'Removed' } as const

/** Two versions of a line: what was added, removed, moved, rescaled, retyped, and the rules by which a set is carried over. */
export function VersionComparison({ view }: { view: FirmwareComparisonView }) {
  const of = (kind: ParameterChange['kind']) => view.parameters.filter((p) => p.kind === kind)
  if (view.parameters.length === 0 && view.image.length === 0) return <p className="text-ink-2">The two versions have the same register map.</p>
  return (
    <div className="grid grid-cols-[minmax(0,1fr)] gap-8">
      {order.map((kind) => of(kind).length > 0 && <Parameters key={kind} kind={kind} view={view} list={of(kind)} />)}
      {view.image.length > 0 && (
        <section aria-labelledby="image-settings" className="min-w-0">
          <SectionHeading id="image-settings">The image itself</SectionHeading>
          <Table dense label="settings of the image that differ" rows={view.image} columns={imageColumns} rowKey={(r) => r.setting} />
        </section>
      )}
      {view.carry && <CarryRules view={view} />}
    </div>
  )
}

const imageColumns: Column<FirmwareComparisonView['image'][number]>[] = [
  { key: 'setting', head: 'Setting', cell: (r) => settingWords[r.setting] ?? r.setting },
  { key: 'before', head: 'Before', className: 'num text-13 text-ink-2', cell: (r) => r.before },
  { key: 'after', head: 'Now', className: 'num text-13', cell: (r) => r.after },
]

function Parameters({ kind, view, list }: { kind: ParameterChange['kind']; view: FirmwareComparisonView; list: readonly ParameterChange[] }) {
  const columns: Column<ParameterChange>[] = [
    {
      key: 'parameter',
      head: 'Parameter',
      className: 'align-top sm:whitespace-nowrap',
      sortBy: (p) => view.titles[p.parameter]?.title ?? p.parameter,
      cell: (p) => (
        <>
          <span className="font-medium">{view.titles[p.parameter]?.title || p.parameter}</span> <span className="num text-12 text-ink-2 max-sm:block">{p.parameter}</span>
          {p.renamedFrom && <span className="block text-12 text-brass">was {p.renamedFrom}</span>}
        </>
      ),
    },
    ...(kind === 'changed' ? [{ key: 'aspects', head: 'What differs', cell: (p: ParameterChange) => <Aspects aspects={p.aspects} /> }] : [{ key: 'unit', head: 'Unit', className: 'text-ink-2', cell: (p: ParameterChange) => view.titles[p.parameter]?.unit ?? '' }]),
  ]
  return (
    <section aria-labelledby={`parameters-${kind}`} className="min-w-0">
      <SectionHeading id={`parameters-${kind}`} aux={count(list.length, 'parameter')}>
        {headings[kind]}
      </SectionHeading>
      <Table dense label={`parameters ${kind}`} rows={list} columns={columns} rowKey={(p) => p.parameter} />
    </section>
  )
}

function Aspects({ aspects }: { aspects: ParameterChange['aspects'] }) {
  if (aspects.length === 0) return <span className="text-13 text-ink-2">the name alone</span>
  return (
    <ul className="py-1">
      {aspects.map((a) => (
        <li key={a.aspect} className="grid gap-x-3 text-13 sm:grid-cols-[8rem_minmax(0,1fr)]">
          <span className="text-ink-2">{wordOf(a)}</span>
          <span className="num [overflow-wrap:anywhere]">
            <del className="text-ink-2 no-underline">{plain(a.before)}</del> <span aria-hidden="true">→</span>
            <span className="sr-only"> now </span> <ins className="text-brass no-underline">{plain(a.after)}</ins>
          </span>
        </li>
      ))}
    </ul>
  )
}

function CarryRules({ view }: { view: FirmwareComparisonView }) {
  const { renames, units, defaults, dropped } = view.carry!
  const lines = [
    ...Object.entries(renames).map(([old, now]) => `${old} becomes ${now}`),
    ...Object.entries(units).map(([name, unit]) => `${name} is converted from ${unit}${view.titles[name]?.unit ? ` to ${view.titles[name].unit}` : ''}`),
    ...Object.entries(defaults).map(([name, value]) => `${name} begins as ${String(value)}`),
    ...dropped.map((name) => `${name} ends here`),
  ]
  return (
    <section aria-labelledby="carry-rules">
      <SectionHeading id="carry-rules">How a set is carried over from {view.before.version}</SectionHeading>
      {lines.length === 0 ? (
        <p className="mt-1 text-13 text-ink-2">Every value keeps its name and unit.</p>
      ) : (
        <ul className="mt-1 text-13">
          {lines.map((line) => (
            <li key={line} className="num border-b border-hairline py-1">
              {line}
            </li>
          ))}
        </ul>
      )}
      <p className="help">A change moves joints over by these rules, with a preview before anybody accepts it.</p>
    </section>
  )
}
