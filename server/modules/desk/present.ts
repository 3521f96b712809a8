import type { EntityManager } from '@mikro-orm/core'
import type { DeskView } from '../../../shared/contract/desk.ts'
import { Change } from '../changes/change.entity.ts'
import { changeKey } from '../changes/locate.ts'
import { Signature } from '../reviews/signature.entity.ts'
import { concessionsToRenew, failedMail, firmwareToPublish, logsToRead, policiesToSign, rightsToConfirm, type Asking } from './waiting-tasks.ts'

/** Open changes that the person signed in their present round. */
async function signedBy(em: EntityManager, { person }: Asking): Promise<string[]> {
  const open = (await em.find(Change, { state: { $in: ['submitted', 'approved'] } }, { populate: ['machine'] })) as Change[]
  const signatures = await em.find(Signature, { change: { $in: open.map((c) => c.id) }, person })
  return open.filter((c) => signatures.some((s) => s.change.id === c.id && s.round === c.round)).map(changeKey)
}

/** What waits for a person besides changes and boards, oldest first. */
export async function presentDesk(em: EntityManager, asking: Asking): Promise<DeskView> {
  const tasks = []
  for (const part of [policiesToSign, firmwareToPublish, rightsToConfirm, failedMail, logsToRead, concessionsToRenew]) tasks.push(...(await part(em, asking)))
  return { tasks: tasks.sort((a, b) => a.since.localeCompare(b.since)), signed: await signedBy(em, asking) }
}
