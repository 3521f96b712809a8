import { useEffect, useEffectEvent, useState } from 'react'
import type { ChangeNews, PresencePage, Present } from '../../../shared/contract/presence.ts'
import { listenInView } from '../../lib/listen-in-view.ts'

type News = Exclude<ChangeNews, { kind: 'present' }>

/** A stream that the server closed for good is opened again after this, ms: rights or the session may be back. */
const TRY_AGAIN = 30_000

/**
 * Follows a change: who else has it open, and what is saved meanwhile.
 *
 * Only a page in view listens, since a browser holds few connections to one server; on its return it reads again what it may have missed.
 *
 * @param onNews    of each act by anybody, also of this person on another page
 * @param onMissed  the stream was interrupted: what happened meanwhile is not known
 */
export function useChangeEvents(change: string, page: PresencePage, { onNews, onMissed }: { onNews: (news: News) => void; onMissed: () => void }): readonly Present[] {
  const [present, setPresent] = useState<readonly Present[]>([])
  const hear = useEffectEvent((news: ChangeNews) => {
    if (news.kind === 'present') setPresent(news.people)
    else onNews(news)
  })
  const missed = useEffectEvent(onMissed)

  useEffect(() => {
    // Old browsers and tests of the page know no such streams; the page then reads anew as it always does.
    if (typeof EventSource === 'undefined') return
    let opened = false
    const alone = () => setPresent([])
    return listenInView(`/api/changes/${encodeURIComponent(change)}/events?page=${page}`, {
      tryAgain: TRY_AGAIN,
      onOpen: () => {
        if (opened) missed()
        opened = true
      },
      onData: (data) => hear(JSON.parse(data) as ChangeNews),
      onBroken: alone,
      onClosed: alone,
    })
  }, [change, page])
  return present
}
