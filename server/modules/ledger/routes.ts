import { route, type RouteSpec } from '../../http/route.ts'
import { exportLedger } from './export-ledger.ts'
import { readBefore, readWord } from './page-query.ts'
import { readLedger } from './read-ledger.ts'
import { verifyLedger } from './verify-ledger.ts'

export const ledgerRoutes: readonly RouteSpec[] = [
  route({
    method: 'get',
    path: '/ledger',
    summary: 'read the ledger',
    access: 'read',
    handle: async ({ em, held, query }) => ({ body: await readLedger(em, held, { before: readBefore(query), act: readWord(query, 'act'), machine: readWord(query, 'machine'), person: readWord(query, 'person') }) }),
  }),
  route({ method: 'get', path: '/ledger/verify', summary: 'verify the ledger', access: 'read', handle: async ({ em }) => ({ body: await verifyLedger(em) }) }),
  route({
    method: 'get',
    path: '/ledger/export.jsonl',
    summary: 'export the ledger',
    access: 'read',
    async handle({ em, held, now }) {
      const { bytes } = await exportLedger(em, held)
      return { bytes, type: 'application/jsonl; charset=utf-8', fileName: `detent-ledger-${now.toISOString().slice(0, 10)}.jsonl` }
    },
  }),
]
