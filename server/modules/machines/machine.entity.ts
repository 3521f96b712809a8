import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'

/** A machine type under control. What it is made of stands in its releases and drafts; this is its identity. */
export const Machine = defineEntity({
  name: 'Machine',
  properties: {
    id: p.integer().primary(),
    key: p.string().length(40).unique(),
    name: p.string().length(80),
    description: p.string().length(400),
    createdAt: p.datetime(),
    retiredAt: p.datetime().nullable(),
    /** last change number given out */
    lastChange: p.integer().default(0),
    /** last release sequence number given out; only grows */
    lastSequence: p.integer().default(0),
  },
})
export type Machine = InferEntity<typeof Machine>

function mustBeInUse(machine: Machine, act: string) {
  if (machine.retiredAt) throw new DomainError('wrong-state', `${machine.name} is retired; it can't be ${act}. Nothing was altered. Its releases and its ledger stay readable.`)
}

export function describe(machine: Machine, edit: { name?: string; description?: string }) {
  mustBeInUse(machine, 'described')
  if (edit.name !== undefined) machine.name = edit.name.trim()
  if (edit.description !== undefined) machine.description = edit.description.trim()
}

export function retire(machine: Machine, now: Date) {
  mustBeInUse(machine, 'retired again')
  machine.retiredAt = now
}
