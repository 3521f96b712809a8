import type supertest from 'supertest'
import type { EvidenceView } from '../../../shared/contract/evidence.ts'
import { backAndForth } from '../../../server/demo/evidence-story.ts'
import { benchLogOfRun, csvOf, positionColumns, type BenchRun } from '../../../server/demo/bench-log-text.ts'
import { readSchema } from '../../../server/modules/firmware/read-schema.ts'
import { readingEnded } from '../../../server/modules/evidence/readings.ts'
import { Evidence } from '../../../server/modules/evidence/evidence.entity.ts'
import { hingeSchema, twoKnees } from '../../support/a-walker.ts'
import type { SignedIn, Workplace } from '../../support/workplace.ts'

/** How the knee on the bench differs from its model. */
export const really = { R: 1.05, J_load: 1.2, tau_c: 1.3 }

const usual: BenchRun = { joint: 'l1-knee', ...backAndForth(0.35), every: 8, seed: 7, really }

/** A knee of the walker stepped back and forth, as its bench writes it down. */
export function kneeLog(over: Partial<BenchRun> = {}): string {
  const { schema } = readSchema(JSON.stringify(hingeSchema()))
  return csvOf(benchLogOfRun(twoKnees(), new Map([['hinge 2.1.0', schema]]), { ...usual, ...over }).log, positionColumns)
}

export function sendLog(person: SignedIn, path: string, text: string | Buffer, name = 'knee.csv'): supertest.Test {
  return person.upload(path, 'log', Buffer.from(text), name, 'post')
}

/** Uploads and reads a log of the knee, by the mapping proposed. */
export async function aReadLog(w: Workplace, person: SignedIn, path: string, text = kneeLog(), name?: string): Promise<EvidenceView> {
  const sent = (await sendLog(person, path, text, name).expect(201)).body as EvidenceView
  return readIt(w, person, sent)
}

export async function readIt(w: Workplace, person: SignedIn, sent: EvidenceView, mapping = sent.mapping): Promise<EvidenceView> {
  const at = `/api/machines/${sent.machine}/evidence/${sent.number}`
  await person.post(`${at}/read`, { mapping }).expect(202)
  const { id } = await w.orm.em.fork().findOneOrFail(Evidence, { number: sent.number, machine: { key: sent.machine } })
  await readingEnded(w.services, { id })
  return (await person.get(at).expect(200)).body as EvidenceView
}
