import { readdirSync, readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { verifyImage } from '../../server/exports/verify/verify-image.ts'
import { encodeImage } from '../../shared/registers/encode-image.ts'
import type { ParameterValues } from '../../shared/registers/parameter-schema.ts'
import { expectParameterSchema } from '../../shared/registers/read-parameter-schema.ts'
import { FIRMWARE, firmwareJson, schemaJson, type Json } from '../registers/a-schema.ts'
import { seeded } from './random-image.ts'

function image(json: Json, values: ParameterValues, release = 7): Uint8Array {
  const encoded = encodeImage(expectParameterSchema(json), values, { release })
  if (encoded.kind === 'refused') throw new Error(encoded.problems[0].message)
  return encoded.image
}
const where = (result: ReturnType<typeof verifyImage>): string[] => (result.kind === 'differs' ? result.differences.map((d) => d.where) : [])
const oneValue = (encoding: string, more: Json = {}): Json => schemaJson({ v: { type: 'number', 'x-register': { address: 0, encoding, ...more } } }, { length: 4 })

describe('the second decoder', () => {
  it('shares no code: its files import each other alone', () => {
    const directory = 'server/exports/verify'
    const imports = readdirSync(directory).flatMap((name) => [...readFileSync(`${directory}/${name}`, 'utf8').matchAll(/from '([^']+)'/g)].map((m) => m[1]))
    expect(imports.length).toBeGreaterThan(3)
    expect(imports.filter((from) => !/^\.\/[a-z-]+\.ts$/.test(from))).toEqual([])
  })

  it.each(FIRMWARE)('%s: agrees, and notices every single flipped bit of the image', (name) => {
    const json = firmwareJson(name)
    const good = image(json, {})
    expect(verifyImage({ schema: json, image: good, values: {}, release: 7 }).kind).toBe('agrees')
    const missed: number[] = []
    for (let bit = 0; bit < good.length * 8; bit += 1) {
      const flipped = good.slice()
      flipped[bit >> 3] ^= 1 << (bit & 7)
      if (verifyImage({ schema: json, image: flipped, values: {}, release: 7 }).kind === 'agrees') missed.push(bit)
    }
    expect(missed).toEqual([])
  })

  it('notices what a checksum made to fit hides: each value has its own comparison', () => {
    const json = firmwareJson('hinge-2.1.0')
    const other = image(json, { velocityGain: 0.3, encoderDirection: 'reverse', supplyCompensated: true }, 8)
    expect(where(verifyImage({ schema: json, image: other, values: {}, release: 7 }))).toEqual(['supplyCompensated', 'encoderDirection', 'velocityGain', 'release'])
    expect(where(verifyImage({ schema: json, image: other.slice(1), values: {}, release: 8 }))).toEqual(['length'])
    expect(where(verifyImage({ schema: json, image: image(json, {}), values: { ghost: 1 }, release: 7 }))).toEqual(['ghost'])
  })

  // verification by distances must agree with rounding exactly at the ties, on both sides
  it.each<[string, Json, (string | number)[]]>([
    ['u8', { scale: 0.1 }, [0.35, 0.25, 0.05, '0.349999999999999999999', '0.350000000000000000001', 25.5]],
    ['i8', { scale: -0.5, offset: 10 }, [9.75, 9.25, 10.75, 73.9]],
    ['q7.8', {}, [1 / 512, 3 / 512, -1 / 512, -3 / 512, 127.99]],
    ['uq0.16', {}, [0.5, 0.99999, '0.00000762939453125']],
    ['f32', {}, [0.1, '1.000000059604644775390625', '1.00000005960464477539062500001', 1e-45, '7.006492321624085354618e-46', 3.4028235e38, -0.1, 0, '1e-60']],
  ])('%s: agrees with the encoder on ties and near them, and with no neighbour', (encoding, register, typed) => {
    const json = oneValue(encoding, register)
    for (const v of typed) {
      const good = image(json, { v }, 0)
      expect(verifyImage({ schema: json, image: good, values: { v }, release: 0 }).kind).toBe('agrees')
      for (const step of [1, 255]) {
        const beside = good.slice()
        beside[0] = (beside[0] + step) & 0xff
        expect(where(verifyImage({ schema: json, image: beside, values: { v }, release: 0 }))).toEqual(['v'])
      }
    }
  })

  it('refuses an f32’s NaN, infinity and −0', () => {
    for (const bytes of [[0, 0, 0xc0, 0x7f], [0, 0, 0x80, 0x7f], [0, 0, 0, 0x80]]) {
      expect(where(verifyImage({ schema: oneValue('f32'), image: Uint8Array.from(bytes), values: { v: 0 }, release: 0 }))).toEqual(['v'])
    }
  })

  it('agrees on seeded values of every kind of register', () => {
    const pick = seeded(20261105)
    const json = firmwareJson('capstan-1.3.0')
    for (let k = 0; k < 200; k += 1) {
      const values = {
        speedGain: pick(60_000) / 1000, rampLimit: 0.1 + pick(39_000) / 101, heatLimit: pick(180) - 40, lineIn: (pick(4_000_001) - 2_000_000) / 1003,
        currentGain: pick(20_000) / 1000, pwmFrequency: 8 + pick(52_000) / 1000, mode: ['velocity', 'current', 'position'][pick(3)], brakeOnFault: pick(2) === 1,
        encoderSense: pick(2) === 1 ? 1 : -1, dutyLimit: 10 + pick(880) / 10,
      }
      const result = verifyImage({ schema: json, image: image(json, values), values, release: 7 })
      expect(result.kind === 'differs' ? result.differences : []).toEqual([])
    }
  })
})
