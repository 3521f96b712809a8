import type { EntityManager } from '@mikro-orm/core'
import type { CompareChoices } from '../../../shared/contract/comparisons.ts'
import { DomainError } from '../../http/errors.ts'
import { route, type RouteSpec } from '../../http/route.ts'
import { onMachine } from '../machines/locate.ts'
import { shownSet } from '../machines/shown-set.ts'
import { may, type HeldRole } from '../people/permissions.ts'
import { compareSides } from './compare-sides.ts'
import type { Side } from './side.ts'
import { sideKinds } from './sides.ts'

const forms = sideKinds.map((k) => `${k.kind}:${k.form}`).join('; ')

/**
 * The side that an address names, if the person may read its machine.
 *
 * @throws DomainError invalid-request when it has no form that is known; not-found
 */
async function sideNamed(em: EntityManager, held: readonly HeldRole[], which: 'a' | 'b', ref: string | undefined): Promise<Side> {
  const at = ref?.indexOf(':') ?? -1
  const kind = sideKinds.find((k) => k.kind === ref?.slice(0, at))
  if (ref === undefined || !kind) throw new DomainError('invalid-request', `Say what to compare as a and b. Nothing was compared; the forms are ${forms}.`, { fields: [{ pointer: `/${which}`, detail: ref === undefined ? 'is missing' : 'has no known form' }] })
  const side = await kind.read(em, ref.slice(at + 1))
  if (!side || !may(held, 'read', side.view.machine).allowed)
    throw new DomainError('not-found', `There is no ${ref} that you may read. Nothing was compared; choose another, or ask an administrator for a role on the machine.`, { fields: [{ pointer: `/${which}`, detail: `names nothing: ${kind.kind}:${kind.form}` }] })
  return side
}

export const comparisonRoutes: readonly RouteSpec[] = [
  route({
    method: 'get',
    path: '/compare',
    query: { a: { description: 'one side', example: 'release:dunlin@1.0.0', required: true }, b: { description: 'the other side', example: 'release:dunlin@1.0.0', required: true } },
    summary: 'compare two releases, revisions, changes or read-backs',
    access: 'read',
    costly: true,
    handle: async ({ em, held, query }) => ({ body: compareSides(await sideNamed(em, held, 'a', query.a), await sideNamed(em, held, 'b', query.b)) }),
  }),
  route({
    method: 'get',
    path: '/machines/:machine/compare-choices',
    summary: 'list what of a machine can be compared',
    access: 'read',
    place: onMachine,
    handle: async ({ em, place }) => {
      const kinds: CompareChoices['kinds'] = []
      for (const { kind, label, narrows, list } of sideKinds) kinds.push({ kind, label, narrows, choices: await list(em, place.found) })
      const { set } = await shownSet(em, place.found)
      return { body: { kinds, joints: Object.entries(set.joints).map(([key, { name }]) => ({ key, name })) } satisfies CompareChoices }
    },
  }),
]
