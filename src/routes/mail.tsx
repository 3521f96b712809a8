import { useInfiniteQuery } from '@tanstack/react-query'
import { PageHead } from '../components/layout/page-head.tsx'
import { useUrlText } from '../components/layout/use-url-state.ts'
import { ProblemPanel } from '../components/problem/problem-panel.tsx'
import { Button } from '../components/ui/button.tsx'
import { EmptyState } from '../components/ui/empty-state.tsx'
import { Waiting } from '../components/ui/waiting.tsx'
import { MailDialog } from '../features/mail/components/mail-dialog.tsx'
import { MailTable } from '../features/mail/components/mail-table.tsx'
import { mailQuery } from '../features/mail/queries.ts'
import { count } from '../lib/format.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = () => {
  void queryClient.prefetchInfiniteQuery(mailQuery)
  return null
}

export function Component() {
  const queue = useInfiniteQuery(mailQuery)
  const [chosen, setChosen] = useUrlText('mail')
  const mails = queue.data?.pages.flatMap((p) => p.mails) ?? []
  const mail = mails.find((m) => String(m.id) === chosen)
  return (
    <>
      <PageHead title="Mail" actions={<Button pending={queue.isFetching} onClick={() => void queue.refetch()}>Look again</Button>}>
        what Detent sends, and whether it went out
      </PageHead>
      {queue.data === undefined ? (
        queue.isError ? <ProblemPanel problem={queue.error} onRetry={() => void queue.refetch()} /> : <Waiting what="the mail" lines={6} />
      ) : mails.length === 0 ? (
        <EmptyState title="No mail was queued yet.">Invitations, resets, signatures and releases each queue their mails here.</EmptyState>
      ) : (
        <>
          <MailTable mails={mails} chosen={mail?.id ?? null} onOpen={(m) => setChosen(String(m.id))} />
          <div className="mt-3 flex flex-wrap items-center gap-4 text-13 text-ink-2">
            <span>{mails.length} of {count(queue.data.pages[0].total, 'mail')} shown</span>
            {queue.hasNextPage && (
              <Button small pending={queue.isFetchingNextPage} onClick={() => void queue.fetchNextPage()}>
                Show older ones
              </Button>
            )}
          </div>
        </>
      )}
      {mail && <MailDialog mail={mail} onClose={() => setChosen('')} />}
    </>
  )
}
