import { useMutation, useQuery, useSuspenseQuery } from '@tanstack/react-query'
import { useNavigate, useParams, useSearchParams } from 'react-router'
import type { LoaderFunctionArgs } from 'react-router'
import { paths } from '../app/paths.ts'
import type { EvidenceView } from '../../shared/contract/evidence.ts'
import { PageHead } from '../components/layout/page-head.tsx'
import { useUrlText } from '../components/layout/use-url-state.ts'
import { ProblemPanel } from '../components/problem/problem-panel.tsx'
import { Button } from '../components/ui/button.tsx'
import { ErrorPanel } from '../components/ui/error-panel.tsx'
import { Select } from '../components/ui/select.tsx'
import { TextLink } from '../components/ui/text-link.tsx'
import { Time } from '../components/ui/time.tsx'
import { changesQuery } from '../features/changes/queries.ts'
import { Identification } from '../features/evidence/components/identification.tsx'
import { LogCharts, type Stretch } from '../features/evidence/components/log-charts.tsx'
import { LogSheet } from '../features/evidence/components/log-sheet.tsx'
import { MappingForm } from '../features/evidence/components/mapping-form.tsx'
import { MeasuredPredicted } from '../features/evidence/components/measured-predicted.tsx'
import { RemoveLog } from '../features/evidence/components/remove-log.tsx'
import { evidenceQuery } from '../features/evidence/queries.ts'
import { useMe } from '../lib/me.ts'
import { queryClient } from '../lib/query-client.ts'
import { takeFile } from '../lib/take-file.ts'

export const loader = ({ params }: LoaderFunctionArgs) => {
  void queryClient.prefetchQuery(changesQuery({ machine: params.machine! }))
  return queryClient.fetchQuery(evidenceQuery(params.machine!, params.evidence!))
}

export function Component() {
  const params = useParams()
  const log = useSuspenseQuery(evidenceQuery(params.machine!, params.evidence!)).data
  const navigate = useNavigate()
  const take = useMutation({ mutationFn: () => takeFile(`/api/machines/${encodeURIComponent(log.machine)}/evidence/${log.number}/file`, `${log.name}.gz`) })
  return (
    <>
      <PageHead
        kicker={
          <>
            <TextLink to={paths.machine(log.machine)}>{log.machineName}</TextLink>, bench log <span className="num">{log.number}</span>
          </>
        }
        title={log.name}
        documentTitle={`${log.name}, ${log.machineName}`}
        actions={
          <>
            <Button pending={take.isPending} onClick={() => take.mutate()}>
              Download
            </Button>
            {log.state !== 'removed' && <RemoveLog log={log} onRemoved={() => void navigate(log.change ? paths.changeReview(log.change) : paths.joint(log.machine, log.joint))} />}
          </>
        }
      >
        of <TextLink to={paths.joint(log.machine, log.joint)}>{log.jointName}</TextLink>
        {log.change && (
          <>
            , for change <TextLink className="num" to={paths.changeReview(log.change)}>{log.change}</TextLink>
          </>
        )}
        ; uploaded by {log.uploadedBy}, <Time at={log.uploadedAt} />
      </PageHead>
      <ProblemPanel className="mb-4" problem={take.error} />
      {log.state === 'removed' && <ErrorPanel className="mb-6" title="This log was removed" happened={`${log.removedBy} removed it; it speaks for nothing any more. Its file stays downloadable, its entries stay in the ledger.`} />}
      {log.state === 'received' && <MappingForm key={log.progress.state === 'running' ? 'running' : 'form'} log={log} />}
      {log.state === 'read' && log.reading && <Read log={log} reading={log.reading} />}
    </>
  )
}

const numberOf = (text: string) => (text === '' || !Number.isFinite(Number(text)) ? null : Number(text))

function Read({ log, reading }: { log: EvidenceView; reading: NonNullable<EvidenceView['reading']> }) {
  const me = useMe()
  const navigate = useNavigate()
  const changes = useQuery(changesQuery({ machine: log.machine })).data ?? []
  const [against, setAgainst] = useUrlText('against')
  const [search, setSearch] = useSearchParams()
  const stretch = { from: numberOf(search.get('from') ?? ''), to: numberOf(search.get('to') ?? '') }
  const look = (s: Stretch) =>
    setSearch(
      (before) => {
        const next = new URLSearchParams(before)
        for (const end of ['from', 'to'] as const) {
          if (s[end] === null) next.delete(end)
          else next.set(end, String(s[end]))
        }
        return next
      },
      { replace: true, preventScrollReset: true },
    )
  const open = changes.filter((c) => c.state === 'draft' || c.state === 'submitted' || c.state === 'approved')
  const drafts = open.filter((c) => c.state === 'draft' && c.writers.includes(me.name)).map(({ key, title }) => ({ key, title }))
  const chooser = (
    <Select
      label="held against"
      width={320}
      value={against === '' ? (open.some((c) => c.key === log.change) ? log.change! : 'release') : against}
      onChange={setAgainst}
      options={[{ value: 'release', label: 'the newest release' }, ...open.map((c) => ({ value: c.key, label: `${c.key}, ${c.title}` }))]}
    />
  )
  return (
    <>
      <LogSheet log={log} />
      <div className="grid grid-cols-[minmax(0,1fr)] gap-x-12 xl:grid-cols-2">
        <div className="min-w-0">
          <LogCharts machine={log.machine} number={log.number} reading={reading} stretch={stretch} onStretch={look} />
        </div>
        <div className="min-w-0">
          <MeasuredPredicted machine={log.machine} number={log.number} against={against} from={stretch.from} chooser={chooser} />
        </div>
      </div>
      <Identification log={log} against={against} drafts={drafts} onDrafted={(change) => void navigate(paths.change(change))} />
    </>
  )
}
