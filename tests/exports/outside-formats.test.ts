import { describe, expect, it } from 'vitest'
import { imageRuns, type Run } from '../../server/exports/image-runs.ts'
import { writeIntelHex } from '../../server/exports/intel-hex.ts'
import { readIntelHex } from '../../server/exports/read-intel-hex.ts'
import { readSRecord } from '../../server/exports/read-s-record.ts'
import { writeSRecord } from '../../server/exports/s-record.ts'
import { inDirectory, read, run, write } from './outside-tools.ts'
import { randomImage, SEEDS } from './random-image.ts'

/** Runs joined and as text, so that two tools' cuts into lines compare. */
function spans(runs: readonly Run[]): string[] {
  const joined: { address: number; bytes: number[] }[] = []
  for (const { address, bytes } of runs) {
    const last = joined[joined.length - 1]
    if (last && last.address + last.bytes.length === address) last.bytes.push(...bytes)
    else joined.push({ address, bytes: [...bytes] })
  }
  return joined.map(({ address, bytes }) => `${address.toString(16)} ${Buffer.from(bytes).toString('hex')}`)
}

const ours = (text: string, format: 'hex' | 'srec'): string[] => {
  const reading = format === 'hex' ? readIntelHex(text) : readSRecord(text)
  if (reading.kind === 'refused') throw new Error(reading.message)
  return spans(reading.runs)
}

// srecord 1.64 (Debian 12): srec_cat
const FORMS = [['hex', '-Intel'], ['srec', '-Motorola']] as const

// one process a seed: a dozen is enough of them
const FEW = SEEDS.slice(0, 12)

describe.each(FORMS)('%s and srec_cat', (format, option) => {
  const written = (seed: number): { text: string; wanted: string[] } => {
    const { schema, encoded } = randomImage(seed)
    const runs = imageRuns(schema, encoded)
    return { text: format === 'hex' ? writeIntelHex(runs) : writeSRecord(runs, 'seed'), wanted: spans(runs) }
  }

  it.each(FEW)('srec_cat reads the bytes of seed %d that Detent wrote', (seed) => {
    inDirectory((path) => {
      const { text, wanted } = written(seed)
      write(path('ours'), text)
      // srec_cat writes the other format, Detent's other reader takes it: bytes and addresses survive
      const [other, back] = format === 'hex' ? (['srec', '-Motorola'] as const) : (['hex', '-Intel'] as const)
      run('srec_cat', [path('ours'), option, '-o', path('theirs'), back])
      expect(ours(read(path('theirs')).toString(), other)).toEqual(wanted)
    })
  })

  it.each(FEW)('Detent reads the bytes of seed %d that srec_cat wrote', (seed) => {
    inDirectory((path) => {
      const { text, wanted } = written(seed)
      write(path('ours'), text)
      run('srec_cat', [path('ours'), option, '-o', path('theirs'), option, '-Line_Length', String(40 + (seed % 3) * 20)])
      expect(ours(read(path('theirs')).toString(), format)).toEqual(wanted)
    })
  })
})

// python3-intelhex 2.3.0 (Debian 12)
const LOAD = `
import sys, json
from io import StringIO
from intelhex import IntelHex
out = []
for text in json.load(sys.stdin):
    ih = IntelHex(); ih.loadhex(StringIO(text))
    again = StringIO(); ih.write_hex_file(again)
    out.append({'segments': [['%x' % a, bytes(ih.tobinarray(start=a, end=b - 1)).hex()] for a, b in ih.segments()], 'again': again.getvalue()})
json.dump(out, sys.stdout)
`

describe('hex and python3-intelhex', () => {
  it('agree both ways on every seed', () => {
    const images = SEEDS.map((seed) => imageRuns(...pair(seed)))
    const answer = run('/usr/bin/python3', ['-c', LOAD], JSON.stringify(images.map(writeIntelHex)))
    const theirs = JSON.parse(answer.toString()) as { segments: [string, string][]; again: string }[]
    expect(theirs).toHaveLength(SEEDS.length)
    for (const [k, runs] of images.entries()) {
      expect(theirs[k].segments.map((s) => s.join(' '))).toEqual(spans(runs))
      expect(ours(theirs[k].again, 'hex')).toEqual(spans(runs))
    }
  })
})

const pair = (seed: number): Parameters<typeof imageRuns> => {
  const { schema, encoded } = randomImage(seed)
  return [schema, encoded]
}

it('covers addresses of two, three and four bytes', () => {
  const kinds = SEEDS.map((seed) => /\nS([123])/.exec(writeSRecord(imageRuns(...pair(seed)), ''))?.[1])
  expect([...new Set(kinds)].sort()).toEqual(['1', '2', '3'])
})
