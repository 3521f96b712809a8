import { useQuery } from '@tanstack/react-query'
import { PageHead } from '../components/layout/page-head.tsx'
import { refusal } from '../components/layout/refused.ts'
import { ProblemPanel } from '../components/problem/problem-panel.tsx'
import { Button } from '../components/ui/button.tsx'
import { ErrorPanel } from '../components/ui/error-panel.tsx'
import { SectionHeading } from '../components/ui/section-heading.tsx'
import { Time } from '../components/ui/time.tsx'
import { Waiting } from '../components/ui/waiting.tsx'
import { BackupTable } from '../features/backups/components/backup-table.tsx'
import { useMakeBackup } from '../features/backups/mutations.ts'
import { backupsQuery } from '../features/backups/queries.ts'
import { count } from '../lib/format.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = () => {
  void queryClient.prefetchQuery(backupsQuery)
  return null
}

export function Component() {
  const backups = useQuery(backupsQuery)
  const make = useMakeBackup()
  const page = backups.data
  const newest = page?.backups[0]
  // A backup that lacks a file says so by name, and orphans are told of the newest one.
  const orphans = newest?.orphans ?? 0
  return (
    <>
      <PageHead
        title="Backups"
        actions={
          <Button unavailable={page && refusal(page.may.make)} pending={make.isPending} onClick={() => make.mutate()}>
            Make one now
          </Button>
        }
      >
        {page && `${page.hour === null ? 'none by itself' : `one a day at ${String(page.hour).padStart(2, '0')}:00 of the server’s clock`}; the newest ${page.kept} are kept`}
      </PageHead>
      <ProblemPanel className="mb-4" problem={make.error} />
      {page === undefined ? (
        backups.isError ? <ProblemPanel problem={backups.error} onRetry={() => void backups.refetch()} /> : <Waiting what="the backups" lines={6} />
      ) : (
        <>
          {page.failed && <ErrorPanel className="mb-4" title="The last backup failed" happened={<><Time at={page.failed.at} style="long" />: {page.failed.why}</>} kept="The backups below are kept." whatToDo="Look at the disk, then make one now." />}
          <BackupTable backups={page.backups} />
          <p className="mt-3 text-13 text-ink-2">
            {count(page.backups.length, 'backup')} in <span className="num [overflow-wrap:anywhere]">{page.folder}</span> on the server
            {page.unreadable > 0 && `; ${count(page.unreadable, 'folder')} there can’t be read as a backup`}
            {orphans > 0 && `; ${count(orphans, 'stored file')} in the newest one ${orphans === 1 ? 'is' : 'are'} named by nothing in the database`}
          </p>
          <section aria-labelledby="restoring" className="mt-8 max-w-[880px]">
            <SectionHeading id="restoring">Keeping and restoring</SectionHeading>
            <p className="mt-2 max-w-[80ch] text-13">Copy the folder to another machine: what lies on the same disk is lost with it. A backup opens everything to whoever has it, and signs nothing: the workplace’s private key is not in it unless the command line was asked for it.</p>
            <p className="mt-2 max-w-[80ch] text-13">Restoring takes the command line, with the server stopped. It proves the backup first, on a copy: the database whole, the ledger’s chain and checkpoints, each file of each release made again byte for byte. The database that it replaces is kept aside.</p>
            <pre className="sheet num mt-2 overflow-x-auto px-3 py-2 text-12">{`npm run -s detent -- restore ${newest?.name ?? 'BACKUP'} --only-prove\nnpm run -s detent -- restore ${newest?.name ?? 'BACKUP'}`}</pre>
          </section>
        </>
      )}
    </>
  )
}
