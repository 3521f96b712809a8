import { mkdirSync } from 'node:fs'
import { dunlin } from '../../server/demo/dunlin.ts'
import { rowsOf } from '../../server/modules/reviews/diff-change.ts'
import type { DiffView } from '../../shared/contract/reviews.ts'
import type { MachineSet } from '../../shared/parameters/machine-set.ts'
import { printSet } from '../../shared/parameters/set-text.ts'
import { Client, must, password, type Answered } from './a-client.ts'
import type { Child } from './a-child.ts'

/** The acts during which the process is killed. */
export const killedActs = ['signing', 'release', 'upload'] as const
export type KilledAct = (typeof killedActs)[number]

export interface Prepared {
  folder: string
  /** Does the act as a person would; the same key each time, so that a second call is a repeat. */
  act(kind: KilledAct, port: number): Promise<Answered>
  /** what the act answers when it is done */
  status: Record<KilledAct, number>
  people: Record<'author' | 'reviewer' | 'manager' | 'deputy' | 'smith', Client>
  /** key of the change that is approved, and what its signature binds to */
  approved: { key: string; contentHash: string; revision: number }
}

/** Two knees on one bus with the demo's numbers. */
function twoKnees(): MachineSet {
  const { fore } = dunlin.buses
  return structuredClone({ buses: { fore }, families: { knee: dunlin.families.knee }, joints: { 'l1-knee': dunlin.joints['l1-knee'], 'r1-knee': dunlin.joints['r1-knee'] } })
}

interface View {
  key: string
  revision: number
  contentHash: string
}

const view = async (client: Client, port: number, key: string) => must(await client.get(port, `/changes/${key}`), 200) as unknown as View

async function aSubmitted(port: number, author: Client, title: string): Promise<string> {
  const { key } = must(await author.act(port, 'POST', '/changes', { machine: 'dunlin', title, reason: 'Starting values from the drive train.' }), 201) as unknown as View
  must(await author.act(port, 'PUT', `/changes/${key}/text`, { text: printSet(twoKnees()) }, { ifMatch: (await view(author, port, key)).revision }), 200)
  must(await author.act(port, 'POST', `/changes/${key}/submit`, {}, { ifMatch: (await view(author, port, key)).revision }), 200)
  return key
}

async function readAll(port: number, client: Client, key: string) {
  const diff = must(await client.get(port, `/changes/${key}/diff`), 200) as unknown as DiffView
  must(await client.act(port, 'POST', `/changes/${key}/reading`, { rows: rowsOf(diff).map((r) => ({ key: r.key, hash: r.hash })) }), 200)
}

/** A folder with one change to be signed and one to be released, both read by their signers, and firmware that waits for its image. */
export async function aPreparedFolder(child: Child, folder: string): Promise<Prepared> {
  mkdirSync(folder, { recursive: true })
  const port = await child.open(folder)
  await child.ask({ do: 'prepare', password })
  const people = {
    author: await Client.signIn(port, 'author'),
    reviewer: await Client.signIn(port, 'reviewer'),
    manager: await Client.signIn(port, 'manager'),
    deputy: await Client.signIn(port, 'deputy'),
    smith: await Client.signIn(port, 'smith'),
  }
  const { author, reviewer, manager, deputy, smith } = people
  const toSign = await aSubmitted(port, author, 'To be signed')
  await readAll(port, reviewer, toSign)
  const toRelease = await aSubmitted(port, author, 'To be released')
  await readAll(port, reviewer, toRelease)
  const submitted = await view(reviewer, port, toRelease)
  must(await reviewer.act(port, 'POST', `/changes/${toRelease}/sign`, { password, contentHash: submitted.contentHash }, { ifMatch: submitted.revision }), 200)
  for (const signer of [manager, deputy]) await readAll(port, signer, toRelease)
  const sign = await view(reviewer, port, toSign)
  const approved = await view(manager, port, toRelease)
  const image = Buffer.alloc(200_000, 0x5a)
  await child.close()
  return {
    folder,
    people,
    approved,
    status: { signing: 200, release: 201, upload: 200 },
    act(kind, at) {
      if (kind === 'signing') return reviewer.act(at, 'POST', `/changes/${toSign}/sign`, { password, contentHash: sign.contentHash }, { ifMatch: sign.revision, key: 'signed-once-only' })
      if (kind === 'release') return manager.act(at, 'POST', `/changes/${toRelease}/release`, { password, contentHash: approved.contentHash, version: '1.0.0' }, { ifMatch: approved.revision, key: 'released-once-only' })
      return smith.upload(at, '/firmware/hinge/2.2.0/image', 'image', image, { ifMatch: 1, key: 'uploaded-once-only' })
    },
  }
}
