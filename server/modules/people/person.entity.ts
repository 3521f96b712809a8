import { defineEntity, p, type InferEntity } from '@mikro-orm/core'

/** A person who may sign in. People are disabled, never deleted: their acts stay theirs. */
export const Person = defineEntity({
  name: 'Person',
  properties: {
    id: p.integer().primary(),
    name: p.string().length(120),
    email: p.string().length(254).unique(),
    passwordHash: p.string().nullable().hidden().lazy(true, false),
    /** why the person's signatures are not accepted until another signer confirms them; null when they are */
    signingHold: p.string().nullable(),
    disabledAt: p.datetime().nullable(),
    createdAt: p.datetime(),
  },
})
export type Person = InferEntity<typeof Person>
