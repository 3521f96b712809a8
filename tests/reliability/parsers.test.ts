import { generateKeyPairSync } from 'node:crypto'
import { readFileSync } from 'node:fs'
import { zipSync } from 'fflate'
import { expect, it } from 'vitest'
import { imageRuns } from '../../server/exports/image-runs.ts'
import { writeIntelHex } from '../../server/exports/intel-hex.ts'
import { readDump, type DumpFormat } from '../../server/exports/read-dump.ts'
import { readZip } from '../../server/exports/read-zip.ts'
import { writeSRecord } from '../../server/exports/s-record.ts'
import { openEnvelope, sealManifest } from '../../server/exports/sign-manifest.ts'
import { verifyKit } from '../../server/exports/verify-kit.ts'
import { DomainError } from '../../server/http/errors.ts'
import { readBoardTable } from '../../server/modules/boards/read-board-table.ts'
import { checkpointLine, readCheckpointLine, signCheckpoint } from '../../server/modules/ledger/checkpoint-line.ts'
import { readText } from '../../shared/parameters/set-text.ts'
import { encodeImage } from '../../shared/registers/encode-image.ts'
import { readJsonText } from '../../shared/registers/json-text.ts'
import { firmware, firmwareText } from '../registers/a-schema.ts'
import { choices, mutated } from './mutate.ts'
import { writeFigures } from './report.ts'

/** Inputs of each run over all parsers; the long one sets 100 000 and more, and writes its figures. */
const wanted = Number(process.env.DETENT_PARSER_FUZZ ?? 8000)
const seed = Number(process.env.DETENT_FUZZ_SEED ?? 7)
/** Above what the parsers hold already when they begin, MiB: an input of some kilobytes that takes more has found a way to multiply. */
const mostGrowth = 400

const schema = firmware('hinge-2.1.0')
const encoded = encodeImage(schema, { busAddress: 0x33 }, { release: 7 })
if (encoded.kind === 'refused') throw new Error(encoded.problems[0].message)
const { privateKey, publicKey } = generateKeyPairSync('ed25519')
const runs = imageRuns(schema, encoded)
const at = new Date('2026-11-12T13:15:00Z')
const file = (path: string) => readFileSync(new URL(`../../${path}`, import.meta.url))
const text = (bytes: Buffer) => bytes.toString('utf8')
const manifest = '{"_type":"https://in-toto.io/Statement/v1","subject":[{"name":"L1 knee.bin","digest":{"sha256":"00"}}],"predicate":{}}'
const zipped = Buffer.from(zipSync({ 'manifest.json': Buffer.from(manifest), 'SHA256SUMS': Buffer.from('00  manifest.json\n'), 'joints/l1-knee/image.bin': encoded.image, 'deep/er/empty': new Uint8Array() }, { level: 6 }))
const csvOf = (image: Uint8Array) => `address,value\n${[...image].map((byte, k) => `0x${k.toString(16)},${byte}`).join('\n')}\n`
const boards = 'serial,machine,joint,release,firmware\nHB-0117,dunlin,l1-knee,1.7.0,"hinge 2.1.0"\nHB-0118,,,,\n'

interface Parser {
  name: string
  good: readonly Buffer[]
  /** reads; answers whether it took the input. May throw what it says it throws, nothing else */
  read: (bytes: Buffer) => boolean
  /** part of the inputs it gets; what is slow for a good reason gets fewer */
  share: number
}

const dump = (format: DumpFormat, good: readonly Buffer[]): Parser => ({ name: `dump, ${format}`, good, share: 3, read: (bytes) => !('message' in readDump(format, bytes, schema)) })

const parsers: readonly Parser[] = [
  { name: 'machine set, JSON with comments', share: 3, good: [file('examples/knee.jsonc'), file('examples/winch.jsonc')], read: (bytes) => readText(text(bytes)).ok },
  { name: 'parameter schema, JSON', share: 2, good: [Buffer.from(firmwareText('hinge-2.1.0'))], read: (bytes) => readJsonText(text(bytes)).kind === 'json' },
  dump('hex', [Buffer.from(writeIntelHex(runs))]),
  dump('srec', [Buffer.from(writeSRecord(runs, 'hinge'))]),
  dump('csv', [Buffer.from(csvOf(encoded.image))]),
  { name: 'table of boards, CSV', share: 3, good: [Buffer.from(boards), Buffer.from(boards.replaceAll(',', ';'))], read: (bytes) => {
    try {
      return readBoardTable(text(bytes)).length > 0
    } catch (error) {
      if (error instanceof DomainError) return false
      throw error
    }
  } },
  { name: 'archive, zip', share: 3, good: [zipped], read: (bytes) => readZip(bytes).kind === 'files' },
  { name: 'kit', share: 1, good: [zipped], read: (bytes) => verifyKit(bytes, null).kind !== 'refused' },
  { name: 'signed envelope, DSSE', share: 2, good: [Buffer.from(sealManifest(manifest, privateKey))], read: (bytes) => openEnvelope(text(bytes), publicKey).kind === 'sealed' },
  { name: 'checkpoints of the ledger', share: 2, good: [Buffer.from(checkpointLine(signCheckpoint({ sequence: 12, hash: 'ab'.repeat(32) }, { at, occasion: 'daily', key: privateKey })))], read: (bytes) => readCheckpointLine(text(bytes)).kind === 'checkpoint' },
]

it.each(parsers)('$name: its good inputs are read, so that what follows begins from there', ({ name, good, read }) => {
  for (const bytes of good) expect(read(bytes), name).toBe(name !== 'kit')
})

it(`answers ${wanted} mutated inputs by a reading or a refusal: nothing thrown, nothing that grows`, () => {
  const shares = parsers.reduce((sum, p) => sum + p.share, 0)
  const rows: string[] = []
  const before = process.memoryUsage().rss
  let most = before
  let given = 0
  for (const { name, good, read, share } of parsers) {
    const count = Math.ceil((wanted * share) / shares)
    let taken = 0
    let longest = 0
    for (let i = 0; i < count; i += 1) {
      const bytes = mutated(good, choices(seed * 1_000_003 + given))
      given += 1
      const began = performance.now()
      try {
        if (read(bytes)) taken += 1
      } catch (error) {
        throw new Error(`${name} threw on input ${given - 1} of seed ${seed}, ${JSON.stringify(bytes.toString('latin1').slice(0, 600))}: ${(error as Error).stack}`, { cause: error })
      }
      longest = Math.max(longest, performance.now() - began)
      if (i % 500 === 0) most = Math.max(most, process.memoryUsage().rss)
    }
    rows.push(`| ${name} | ${count} | ${taken} | ${longest.toFixed(1)} |`)
  }
  expect((most - before) / 2 ** 20).toBeLessThan(mostGrowth)
  expect(Object.keys(Object.prototype)).toEqual([])
  if (process.env.DETENT_PARSER_FUZZ)
    writeFigures('parsers', `Seed ${seed}: ${given} inputs, nothing thrown. The process grew by ${((most - before) / 2 ** 20).toFixed(0)} MiB at most.\n\n| parser | inputs | taken | longest ms |\n| --- | ---: | ---: | ---: |\n${rows.join('\n')}`, new Date())
}, Math.max(120_000, wanted * 20))
