import { createHash, createPrivateKey } from 'node:crypto'
import { describe, expect, it } from 'vitest'
import { readHexRecord } from '../../server/exports/read-intel-hex.ts'
import { readSRecordLine } from '../../server/exports/read-s-record.ts'
import { publicKeyPem, signText } from '../../server/exports/sign-manifest.ts'
import { checksumOf, type ChecksumAlgorithm } from '../../shared/registers/checksum.ts'
import { numberCodec, parseEncoding, toRaw } from '../../shared/registers/encoding.ts'
import { decimalOf, ONE, ZERO } from '../../shared/registers/rational.ts'
import { rawToWord } from '../../shared/registers/word-bytes.ts'
import published from './published/encodings.json' with { type: 'json' }

interface Entry { id: string; inputs: Record<string, unknown>; expected: unknown; recomputed: unknown; kind: string; source: string }
const entries = published as Entry[]
const topic = (start: string): [string, Entry][] => entries.filter((e) => e.id.startsWith(start)).map((e) => [`${e.id} (${e.source})`, e])
const raw = (encoding: string, value: number): number | null => {
  const codec = numberCodec(parseEncoding(encoding)!, ONE, ZERO)
  const result = toRaw(codec, decimalOf(value)!)
  return result.kind === 'raw' ? rawToWord(result.raw, codec.encoding.bits) : null
}

it('holds every kind of published entry that applies', () => {
  const kinds = new Map<string, number>()
  for (const { id } of entries) kinds.set(id.split('.')[0], (kinds.get(id.split('.')[0]) ?? 0) + 1)
  expect(Object.fromEntries(kinds)).toEqual({ crc: 3, ihex: 13, srec: 4, f32: 14, q: 5, sha256: 2, ed25519: 2 })
})

describe('published values', () => {
  it.each(topic('crc.'))('%s', (_name, { id, inputs, expected }) => {
    expect(checksumOf(id.slice(4) as ChecksumAlgorithm, new TextEncoder().encode(String(inputs.data)))).toBe(Number(expected))
  })

  it.each(topic('f32.'))('%s', (_name, { inputs, expected }) => {
    expect(raw('f32', Number(inputs.value))?.toString(16).padStart(8, '0')).toBe(expected)
  })

  // CMSIS-DSP saturates and truncates; Detent rounds and refuses: the rounded Q15 word is the same inside the range,
  // the truncated Q31 word at most one below
  it.each(topic('q.'))('%s', (_name, { inputs, recomputed }) => {
    const [, rounded, truncated] = (recomputed as string[]).map(Number)
    const value = Number(inputs.value)
    if (value === 1) {
      expect(raw('q0.15', 1)).toBeNull()
      expect(raw('q0.31', 1)).toBeNull()
    } else {
      expect(raw('q0.15', value)).toBe(rounded)
      expect(Math.abs(raw('q0.31', value)! - truncated)).toBeLessThanOrEqual(1)
    }
  })

  it.each(topic('ihex.'))('%s', (_name, { inputs, kind, recomputed }) => {
    const reading = readHexRecord(String(inputs.record), 1)
    expect(reading.kind).toBe(kind === 'negative' ? 'refused' : 'record')
    if (reading.kind === 'refused') expect(reading.message).toContain(`give ${(recomputed as { correct: string }).correct}`)
  })

  it.each(topic('srec.'))('%s', (_name, { inputs, kind }) => {
    expect(readSRecordLine(String(inputs.record), 1).kind).toBe(kind === 'negative' ? 'refused' : 'record')
  })

  it.each(topic('sha256.'))('%s', (_name, { inputs, expected }) => {
    expect(createHash('sha256').update(String(inputs.message)).digest('hex')).toBe(expected)
  })

  it.each(topic('ed25519.'))('%s: the seed gives the published public key', (_name, { inputs, expected }) => {
    const key = createPrivateKey({ key: Buffer.from(`302e020100300506032b657004220420${String(inputs.seed)}`, 'hex'), format: 'der', type: 'pkcs8' })
    const { pub, sig } = expected as { pub: string; sig: string }
    const der = Buffer.from(publicKeyPem(key).replace(/-----[^-]+-----|\s/g, ''), 'base64')
    expect(der.subarray(-32).toString('hex')).toBe(pub)
    // the message is bytes; only the one that is ASCII can be signed as text
    if (inputs.message === '72') expect(Buffer.from(signText('r', key)).toString('hex')).toBe(sig)
  })
})
