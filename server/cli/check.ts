import { parseArgs } from 'node:util'
import { defaultPolicy } from '../../shared/contract/policy.ts'
import { emptySet } from '../../shared/parameters/machine-set.ts'
import { MODEL_VERSION } from '../control/model-version.ts'
import { runCheck } from '../modules/checks/run-check.ts'
import { readSetFile } from './read-set-file.ts'
import { Usage } from './usage.ts'

/** Checks every joint of a file under the default policy. Exit code 0: nothing blocks; 1: something does. */
export async function check(args: string[]): Promise<number> {
  const { values, positionals } = parseArgs({ args, allowPositionals: true, options: { json: { type: 'boolean' }, schemas: { type: 'string' } } })
  if (positionals.length !== 1) throw new Usage('check takes one file.')
  const { set, documents } = readSetFile(positionals[0], values.schemas)
  const result = runCheck({ modelVersion: MODEL_VERSION, policyNumber: 0, policy: defaultPolicy, candidate: set, base: emptySet(), schemas: documents, firmwareStates: Object.fromEntries(Object.keys(documents).map((name) => [name, 'published' as const])) })
  const blocks = result.counts.block > 0
  if (values.json) {
    process.stdout.write(`${JSON.stringify(result, null, 2)}\n`)
    return blocks ? 1 : 0
  }
  const lines = [
    ...result.joints.map((j) => (j.candidate ? `${j.joint}: ${j.candidate.verdict}, rho ${j.candidate.rho.toPrecision(9)} over ${Number((j.candidate.hyperperiodS * 1e3).toPrecision(6))} ms` : `${j.joint}: not analysed`)),
    '',
    ...result.findings.map((f) => `${f.level}: ${f.kind}${f.loop ? `, ${f.loop} loop` : ''}${f.joints.length > 0 ? ` (${f.joints.join(', ')})` : ''}: ${f.text}${f.remedy ? ` ${f.remedy}` : ''}`),
    '',
    `${Object.entries(result.counts).map(([level, n]) => `${n} ${level}`).join(', ')}`,
  ]
  process.stdout.write(`${lines.join('\n')}\n`)
  return blocks ? 1 : 0
}
