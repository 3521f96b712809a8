import { parseArgs } from 'node:util'
import { defaultPolicy } from '../../shared/contract/policy.ts'
import { emptySet } from '../../shared/parameters/machine-set.ts'
import { MODEL_VERSION } from '../control/model-version.ts'
import { computeHere } from '../jobs/flows.ts'
import type { StoredOutcome } from '../jobs/results.ts'
import { assembleCheck } from '../modules/checks/assemble-check.ts'
import type { CheckInputs } from '../modules/checks/check-inputs.ts'
import { nominalRequests, prepareCheck, toleranceRequests } from '../modules/checks/prepare-check.ts'
import { hashOf } from '../modules/firmware/schema-cache.ts'
import { printCheck } from './print-check.ts'
import { readSetFile } from './read-set-file.ts'
import { Usage } from './usage.ts'

/** Checks every joint of a file under the default policy, tolerances included. Exit code 0: nothing blocks; 1: something does. */
export async function check(args: string[]): Promise<number> {
  const { values, positionals } = parseArgs({ args, allowPositionals: true, options: { json: { type: 'boolean' }, schemas: { type: 'string' } } })
  if (positionals.length !== 1) throw new Usage('check takes one file.')
  const { set, schemas, documents } = readSetFile(positionals[0], values.schemas)
  const inputs: CheckInputs = {
    modelVersion: MODEL_VERSION, policyNumber: 0, policy: defaultPolicy, candidate: set, base: emptySet(),
    schemas: Object.fromEntries([...schemas].map(([name, schema]) => [name, { schema, hash: hashOf(documents[name]) }])),
    firmwareStates: Object.fromEntries([...schemas.keys()].map((name) => [name, 'published' as const])),
  }
  const prepared = prepareCheck(inputs)
  const known = new Map<string, StoredOutcome>()
  for (const asked of [...nominalRequests(prepared), ...toleranceRequests(prepared)]) known.set(asked.hash, await computeHere(asked))
  const result = assembleCheck(prepared, known)
  process.stdout.write(values.json ? `${JSON.stringify(result, null, 2)}\n` : printCheck(result, set))
  return result.counts.block > 0 ? 1 : 0
}
