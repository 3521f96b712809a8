import type { ChangeNews, PresencePage, Present } from '../../../shared/contract/presence.ts'
import { DomainError } from '../../http/errors.ts'
import type { EventSink } from '../../http/route.ts'
import type { Services } from '../../http/services.ts'

/** Somebody with a page of a change open. */
interface Listener {
  person: { id: number; name: string }
  page: PresencePage
  send(news: ChangeNews): void
}

/** Streams that one person may hold open at once: a tab each, and some more. */
const mostOpen = 16

/** Who listens, by change. In memory: who has a page open is true of this process alone, and of nothing after it. */
type Registry = Map<number, Set<Listener>>
const registries = new WeakMap<Services, Registry>()

function registryOf(services: Services): Registry {
  const known = registries.get(services)
  if (known) return known
  const made: Registry = new Map()
  registries.set(services, made)
  return made
}

/** Everybody else with a page of the change open, each page once. */
const others = (listeners: ReadonlySet<Listener>, person: number): Present[] => [
  ...new Map([...listeners].filter((l) => l.person.id !== person).map((l) => [`${l.person.id} ${l.page}`, { name: l.person.name, page: l.page }])).values(),
]

/** Tells everybody who has a page of the change open, whoever did it: a person's other pages are to follow too. */
export function tellOf(services: Services, change: number, news: ChangeNews): void {
  for (const l of registryOf(services).get(change) ?? []) l.send(news)
}

const tellPresence = (listeners: ReadonlySet<Listener>) => {
  for (const l of listeners) l.send({ kind: 'present', people: others(listeners, l.person.id) })
}

/** Follows a change for as long as the page is open. @throws DomainError too-many-requests */
export function followChange(services: Services, change: number, { person, page }: Pick<Listener, 'person' | 'page'>): (sink: EventSink) => () => void {
  const registry = registryOf(services)
  const held = [...registry.values()].flatMap((s) => [...s]).filter((l) => l.person.id === person.id).length
  if (held >= mostOpen) throw new DomainError('too-many-requests', `You follow ${held} pages of changes already. Close one of them, and reload.`)
  return (sink) => {
    const listener: Listener = { person: { id: person.id, name: person.name }, page, send: (news) => sink.send(news) }
    const listeners = registry.get(change) ?? new Set()
    registry.set(change, listeners.add(listener))
    tellPresence(listeners)
    return () => {
      listeners.delete(listener)
      if (listeners.size === 0) registry.delete(change)
      else tellPresence(listeners)
    }
  }
}
