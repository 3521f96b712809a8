import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import type { Services } from '../../http/services.ts'
import { addEvent } from '../changes/add-event.ts'
import { renewHash, type Change } from '../changes/change.entity.ts'
import { again } from '../changes/locate.ts'
import { checkChange } from '../checks/check-change.ts'
import { contentOf, type Content } from './content-of.ts'

/**
 * Everything of a submitted change computed again, for a signature on `contentHash`.
 *
 * Where the model, the policy, a firmware version or the base moved since submission, the signatures no longer say what they said: the
 * change gets a new round on its new hash, visibly, and this signature is refused.
 *
 * @throws DomainError content-differs (the signer read another state), check-stale (it moved meanwhile)
 */
export async function recompute(services: Services, em: EntityManager, change: Change, contentHash: string): Promise<Content> {
  if (change.contentHash === null) throw new DomainError('wrong-state', `Change ${change.number} is ${change.state}; there is nothing to sign. Nothing was done.`)
  const { result } = await checkChange(services, em, change)
  const content = await contentOf(em, change, result)
  const blocked = result.findings.some((f) => f.level === 'block')
  if (content.hash !== change.contentHash || blocked) {
    await services.orm.em.fork().transactional(async (tx) => {
      const fresh = await again(tx, change)
      if (fresh.contentHash !== change.contentHash) return
      const now = services.now()
      renewHash(fresh, content.hash, now)
      await addEvent(tx, fresh, { kind: 'signature void', person: null, at: now, note: 'the check became stale: the model, the policy or a firmware version moved since it was submitted', details: { contentHash: content.hash } })
    })
    throw new DomainError('check-stale', 'What was submitted computes to another result by now (the model, the policy or a firmware version moved). Signatures on it are void; read the new check, then sign.')
  }
  if (content.hash !== contentHash) throw new DomainError('content-differs', 'You read another state of this change than the one that stands. Nothing was signed; reload and read it again.')
  return content
}
