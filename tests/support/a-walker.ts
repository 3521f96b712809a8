import { readFileSync } from 'node:fs'
import { dunlin } from '../../server/demo/dunlin.ts'
import { rowsOf } from '../../server/modules/reviews/diff-change.ts'
import type { ChangeView } from '../../shared/contract/changes.ts'
import type { DiffView } from '../../shared/contract/reviews.ts'
import type { MachineSet } from '../../shared/parameters/machine-set.ts'
import { printSet } from '../../shared/parameters/set-text.ts'
import { aFirmware } from './a-firmware.ts'
import { aMachine } from './a-release.ts'
import { aWorkplace, password, type SignedIn, type Workplace } from './workplace.ts'

/** Two knees of Dunlin on one bus, with the demo's numbers, on hinge 2.1.0. */
export function twoKnees(): MachineSet {
  const { fore } = dunlin.buses
  return structuredClone({ buses: { fore }, families: { knee: dunlin.families.knee }, joints: { 'l1-knee': dunlin.joints['l1-knee'], 'r1-knee': dunlin.joints['r1-knee'] } })
}

export const hingeSchema = (version = '2.1.0'): object => JSON.parse(readFileSync(new URL(`../../examples/firmware/hinge-${version}.schema.json`, import.meta.url), 'utf8')) as object

export interface Walker extends Workplace {
  engineer: SignedIn
  other: SignedIn
  reviewer: SignedIn
  manager: SignedIn
  builder: SignedIn
  observer: SignedIn
}

/** A workplace with the machine "dunlin", its firmware published, and a person for each part; nothing released yet. */
export async function aWalker(): Promise<Walker> {
  const w = await aWorkplace()
  await aMachine(w)
  await aFirmware(w, { schema: hingeSchema() })
  const on = 'dunlin'
  return {
    ...w,
    engineer: await w.as([['controls engineer', on]]),
    other: await w.as([['controls engineer', on]]),
    reviewer: await w.as([['peer reviewer', on]]),
    manager: await w.as([['release manager', on]]),
    builder: await w.as([['builder', on]]),
    observer: await w.as([['observer', on]]),
  }
}

export const etag = (view: Pick<ChangeView, 'revision'>) => `"${view.revision}"`

export async function read(person: SignedIn, key: string): Promise<ChangeView> {
  return (await person.get(`/api/changes/${key}`).expect(200)).body as ChangeView
}

/** A draft by the engineer holding this set, with a reason. */
export async function aDraft(w: Walker, set: MachineSet = twoKnees(), title = 'First numbers'): Promise<string> {
  const { key } = (await w.engineer.post('/api/changes', { machine: 'dunlin', title, reason: 'Starting values from the drive train.' }).expect(201)).body as { key: string }
  await w.engineer.put(`/api/changes/${key}/text`, { text: printSet(set) }).set('If-Match', etag(await read(w.engineer, key))).expect(200)
  return key
}

export async function submitted(w: Walker, key: string): Promise<ChangeView> {
  return (await w.engineer.post(`/api/changes/${key}/submit`).set('If-Match', etag(await read(w.engineer, key))).expect(200)).body as ChangeView
}

/** Marks every row of what a change alters as read by this person. */
export async function readAll(person: SignedIn, key: string): Promise<void> {
  const diff = (await person.get(`/api/changes/${key}/diff`).expect(200)).body as DiffView
  await person.post(`/api/changes/${key}/reading`, { rows: rowsOf(diff).map((r) => ({ key: r.key, hash: r.hash })) }).expect(200)
}

export async function reviewed(w: Walker, key: string): Promise<ChangeView> {
  await readAll(w.reviewer, key)
  const view = await read(w.reviewer, key)
  return (await w.reviewer.post(`/api/changes/${key}/sign`, { password, contentHash: view.contentHash }).set('If-Match', etag(view)).expect(200)).body as ChangeView
}

export async function released(w: Walker, key: string, version = '1.0.0', stepReason = ''): Promise<void> {
  await readAll(w.manager, key)
  const view = await read(w.manager, key)
  await w.manager.post(`/api/changes/${key}/release`, { password, contentHash: view.contentHash, version, stepReason }).set('If-Match', etag(view)).expect(201)
}

/** From draft to release in the usual way. */
export async function through(w: Walker, key: string, version?: string, stepReason?: string): Promise<void> {
  await submitted(w, key)
  await reviewed(w, key)
  await released(w, key, version, stepReason)
}
