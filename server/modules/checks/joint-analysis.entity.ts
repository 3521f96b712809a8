import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import type { AnalysisKind } from '../../jobs/analyses/requests.ts'
import type { StoredOutcome } from '../../jobs/results.ts'

/** Result of one analysis by the hash of its inputs and the model version: joints alike, reloads and restarts are answered from here. Immutable. */
export const JointAnalysis = defineEntity({
  name: 'JointAnalysis',
  properties: {
    hash: p.string().length(64).primary(),
    kind: p.string().$type<AnalysisKind>(),
    outcome: p.json<StoredOutcome>(),
    createdAt: p.datetime(),
  },
})
export type JointAnalysis = InferEntity<typeof JointAnalysis>
