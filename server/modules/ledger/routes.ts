import { HeldCheckpoints } from '../../../shared/contract/ledger.ts'
import { Nothing } from '../../../shared/contract/people.ts'
import { route, type RouteSpec } from '../../http/route.ts'
import { exportCsv } from './export-csv.ts'
import { exportLedger } from './export-ledger.ts'
import { readBefore, readWord } from './page-query.ts'
import { exportCheckpoints, readCheckpoints } from './read-checkpoints.ts'
import { readLedger } from './read-ledger.ts'
import { signCheckpointNow } from './sign-checkpoint-now.ts'
import { verifyCheckpointFile, verifyOwnCheckpoints } from './verify-checkpoints.ts'
import { verifyLedger } from './verify-ledger.ts'

const jsonLines = 'application/jsonl; charset=utf-8'
const day = (now: Date) => now.toISOString().slice(0, 10)

export const ledgerRoutes: readonly RouteSpec[] = [
  route({
    method: 'get',
    path: '/ledger',
    query: { before: { description: 'entries before this number in the chain', example: '5' }, act: { description: 'one kind of act' }, machine: { description: 'one machine, by its key', example: 'dunlin' }, person: { description: 'who acted, by name or number' } },
    summary: 'read the ledger',
    access: 'read',
    handle: async ({ em, held, query }) => ({ body: await readLedger(em, held, { before: readBefore(query), act: readWord(query, 'act'), machine: readWord(query, 'machine'), person: readWord(query, 'person') }) }),
  }),
  route({ method: 'get', path: '/ledger/verify', summary: 'verify the ledger', access: 'read', costly: true, handle: async ({ em }) => ({ body: await verifyLedger(em) }) }),
  route({
    method: 'get',
    path: '/ledger/export.jsonl',
    gives: 'application/jsonl',
    summary: 'export the ledger',
    access: 'read',
    costly: true,
    async handle({ em, held, now }) {
      const { bytes } = await exportLedger(em, held)
      return { bytes, type: jsonLines, fileName: `detent-ledger-${day(now)}.jsonl` }
    },
  }),
  route({
    method: 'get',
    path: '/ledger/export.csv',
    gives: 'text/csv',
    summary: 'export the ledger as a table',
    access: 'read',
    costly: true,
    handle: async ({ em, held, now }) => ({ bytes: await exportCsv(em, held), type: 'text/csv; charset=utf-8', fileName: `detent-ledger-${day(now)}.csv` }),
  }),
  route({ method: 'get', path: '/ledger/checkpoints', summary: 'read the checkpoints of the ledger', access: 'read', handle: async ({ em, held }) => ({ body: await readCheckpoints(em, held) }) }),
  route({
    method: 'get',
    path: '/ledger/checkpoints.jsonl',
    gives: 'application/jsonl',
    summary: 'export the checkpoints of the ledger',
    access: 'read',
    costly: true,
    handle: async ({ em, now }) => ({ bytes: await exportCheckpoints(em), type: jsonLines, fileName: `detent-checkpoints-${day(now)}.jsonl` }),
  }),
  route({
    method: 'post',
    path: '/ledger/checkpoints',
    summary: 'sign a checkpoint of the ledger',
    access: 'keep backups',
    costly: true,
    body: Nothing,
    handle: (call) =>
      call.act(async (em) => {
        await signCheckpointNow(em, { key: call.services.keys.current, person: call.person, now: call.now })
        await em.flush()
        return { status: 201, body: await readCheckpoints(em, call.held) }
      }),
  }),
  route({ method: 'get', path: '/ledger/checkpoints/verify', summary: 'hold its own checkpoints against the ledger', access: 'read', costly: true, handle: async ({ em }) => ({ body: await verifyOwnCheckpoints(em) }) }),
  route({
    method: 'post',
    path: '/ledger/checkpoints/verify',
    summary: 'hold a file of checkpoints against the ledger',
    access: 'read',
    costly: true,
    body: HeldCheckpoints,
    handle: async ({ em, body }) => ({ body: await verifyCheckpointFile(em, body.checkpoints) }),
  }),
]
