import { useQueries, useQuery } from '@tanstack/react-query'
import { Link, useSearchParams } from 'react-router'
import { paths } from '../app/paths.ts'
import { PageHead } from '../components/layout/page-head.tsx'
import { fits } from '../components/layout/use-url-state.ts'
import { ProblemPanel } from '../components/problem/problem-panel.tsx'
import { EmptyState } from '../components/ui/empty-state.tsx'
import { SectionHeading } from '../components/ui/section-heading.tsx'
import { Waiting } from '../components/ui/waiting.tsx'
import { changesQuery } from '../features/changes/queries.ts'
import { firmwareLinesQuery } from '../features/firmware/queries.ts'
import { machineQuery, machinesQuery } from '../features/machines/queries.ts'
import { peopleQuery } from '../features/people/queries.ts'
import { releasesQuery } from '../features/releases/queries.ts'
import { count, formatHex } from '../lib/format.ts'

interface Find {
  to: string
  name: string
  note: string
}

/** Whatever of the workplace is called like the words asked for, by kind. */
export function Component() {
  const [search] = useSearchParams()
  const asked = (search.get('q') ?? '').trim()
  // A hash is shown in groups of four and may be typed as it is shown.
  const words = /^[0-9a-f]{4}( [0-9a-f]{4})+$/i.test(asked) ? asked.replaceAll(' ', '') : asked
  const machines = useQuery(machinesQuery)
  const views = useQueries({ queries: (machines.data ?? []).map((m) => machineQuery(m.key)) })
  const changes = useQuery(changesQuery())
  const releases = useQuery(releasesQuery())
  const lines = useQuery(firmwareLinesQuery)
  const people = useQuery(peopleQuery)
  const all = [machines, ...views, changes, releases, lines, people]
  const shown = views.flatMap((v) => v.data ?? [])

  const kinds: { kind: string; finds: Find[] }[] = [
    { kind: 'Machines', finds: (machines.data ?? []).filter((m) => fits(words, m.name, m.key, m.description)).map((m) => ({ to: paths.machine(m.key), name: m.name, note: m.description })) },
    {
      kind: 'Joints',
      finds: shown.flatMap((m) =>
        m.jointList
          .filter((j) => fits(words, m.name, j.name, j.key, j.bus, j.familyName, j.firmware, j.mode, formatHex(j.address), `0x${j.address.toString(16)}`))
          .map((j) => ({ to: paths.joint(m.key, j.key), name: j.name, note: `${m.name}, ${j.bus} ${formatHex(j.address)}, ${j.familyName}` })),
      ),
    },
    { kind: 'Families', finds: shown.flatMap((m) => m.familyList.filter((f) => fits(words, m.name, f.name, f.key)).map((f) => ({ to: paths.family(m.key, f.key), name: f.name, note: m.name }))) },
    { kind: 'Buses', finds: shown.flatMap((m) => m.busList.filter((b) => fits(words, m.name, b.settings.name, b.key)).map((b) => ({ to: paths.bus(m.key, b.key), name: b.settings.name, note: m.name }))) },
    { kind: 'Changes', finds: (changes.data ?? []).filter((c) => fits(words, c.key, c.number, c.title, c.machineName, c.author, c.state)).map((c) => ({ to: c.state === 'draft' ? paths.change(c.key) : paths.changeReview(c.key), name: c.title, note: `${c.machineName} ${c.number}, ${c.life}, by ${c.author}` })) },
    { kind: 'Releases', finds: (releases.data ?? []).filter((r) => fits(words, r.machineName, r.version, r.title, r.state, r.releasedBy)).map((r) => ({ to: paths.release(r.machine, r.version), name: `${r.machineName} ${r.version}`, note: `${r.state}, ${r.title}` })) },
    {
      kind: 'Firmware',
      finds: (lines.data ?? []).flatMap((l) => l.versions.filter((v) => fits(words, l.name, l.key, v.version, v.state, v.schemaHash)).map((v) => ({ to: paths.firmwareVersion(l.key, v.version), name: `${l.key} ${v.version}`, note: `${v.state}, ${count(v.parameters, 'parameter')}` }))),
    },
    { kind: 'People', finds: (people.data?.people ?? []).filter((p) => fits(words, p.name, p.email)).map((p) => ({ to: paths.person(p.id), name: p.name, note: p.roles.map((r) => r.role).join(', ') })) },
  ]
  const found = asked === '' ? [] : kinds.filter((k) => k.finds.length > 0)
  const waiting = all.some((q) => q.isPending)
  const failed = all.find((q) => q.isError)
  return (
    <>
      <PageHead title={asked === '' ? 'Search' : `“${asked}”`} documentTitle={`Search: ${asked}`} kicker={asked === '' ? undefined : 'search'} />
      {failed && <ProblemPanel className="mb-4" problem={failed.error} onRetry={() => void failed.refetch()} />}
      <div className="grid max-w-[980px] gap-6" aria-live="polite">
        {found.map(({ kind, finds }) => (
          <section key={kind} aria-label={kind}>
            <SectionHeading aux={count(finds.length, 'find')}>{kind}</SectionHeading>
            <ul>
              {finds.map((f) => (
                <li key={f.to} className="flex flex-wrap items-baseline gap-x-3 border-b border-hairline py-[6px] last:border-rule">
                  <Link className="row-link" to={f.to}>
                    {f.name}
                  </Link>
                  <span className="text-13 text-ink-2">{f.note}</span>
                </li>
              ))}
            </ul>
          </section>
        ))}
        {waiting && <Waiting what="the rest" lines={3} />}
        {!waiting && found.length === 0 && (
          <EmptyState title={asked === '' ? 'Nothing is asked for.' : 'Nothing is called like that.'}>
            Machines, joints (also by address, as 0x33), families, buses, changes, releases, firmware and people are searched by name. Press / and write a word of theirs.
          </EmptyState>
        )}
      </div>
    </>
  )
}
