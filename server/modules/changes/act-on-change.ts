import { mustMatch, type Call } from '../../http/route.ts'
import type { Change } from './change.entity.ts'
import { again, type OnChange } from './locate.ts'
import { presentChange } from './present.ts'

/** Runs an act on a change inside a transaction and answers with the change as it stands after. */
export function actOnChange<B>(call: Call<B, OnChange>, work: (em: Call<B, OnChange>['em'], change: Change) => Promise<void>, { match = true } = {}) {
  return call.act(async (em) => {
    const change = await again(em, call.place.change)
    if (match) mustMatch(call, change.revision)
    await work(em, change)
    await em.flush()
    return { body: await presentChange(em, change, call.person, call.held), etag: change.revision }
  })
}
