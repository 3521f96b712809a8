import { defineEntity, p, type InferEntity } from '@mikro-orm/core'

/** One firmware product of the team, for one board design. */
export const FirmwareLine = defineEntity({
  name: 'FirmwareLine',
  properties: {
    id: p.integer().primary(),
    key: p.string().length(40).unique(),
    name: p.string().length(80),
    description: p.string().length(400),
    createdAt: p.datetime(),
  },
})
export type FirmwareLine = InferEntity<typeof FirmwareLine>

export function describe(line: FirmwareLine, edit: { name?: string; description?: string }) {
  if (edit.name !== undefined) line.name = edit.name.trim()
  if (edit.description !== undefined) line.description = edit.description.trim()
}
