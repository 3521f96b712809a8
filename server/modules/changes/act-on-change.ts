import type { ChangeView } from '../../../shared/contract/changes.ts'
import { editsBetween } from '../../../shared/parameters/edits.ts'
import { mustMatch, type Call } from '../../http/route.ts'
import type { Change } from './change.entity.ts'
import { tellOf } from './events.ts'
import { again, type OnChange } from './locate.ts'
import { presentChange } from './present.ts'
import { setOf } from './read-set.ts'

/**
 * Runs an act on a change inside a transaction and answers with the change as it stands after.
 *
 * Whoever has the change open is told after it: which values were saved, or that it moved on.
 */
export async function actOnChange<B>(call: Call<B, OnChange>, work: (em: Call<B, OnChange>['em'], change: Change) => Promise<void>, { match = true } = {}) {
  const { id, text } = call.place.change
  const answer = await call.act(async (em) => {
    const change = await again(em, call.place.change)
    if (match) mustMatch(call, change.revision)
    await work(em, change)
    await em.flush()
    return { body: await presentChange(em, change, call), etag: change.revision }
  })
  const { body: view } = answer as { body: ChangeView }
  const told = { by: call.person.name, at: call.now.toISOString(), revision: view.revision }
  if (view.text === text) tellOf(call.services, id, { kind: 'moved', ...told, state: view.state })
  else tellOf(call.services, id, { kind: 'saved', ...told, pointers: editsBetween(setOf(text), view.set).slice(0, 100).map((e) => e.pointer) })
  return answer
}
