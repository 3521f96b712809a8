import { createPrivateKey, createPublicKey, generateKeyPairSync, type KeyObject } from 'node:crypto'
import { mkdirSync } from 'node:fs'
import { dirname } from 'node:path'
import { unzipSync, zipSync } from 'fflate'
import { beforeAll, describe, expect, it } from 'vitest'
import type { ExportContext } from '../../server/exports/export-context.ts'
import { firmwarePath, jointFiles, packKit, readmeFor, signKit, sumLines } from '../../server/exports/kit.ts'
import { buildManifest, type ManifestInput } from '../../server/exports/manifest.ts'
import { readZip } from '../../server/exports/read-zip.ts'
import { sha256 } from '../../server/exports/record.ts'
import { keyId, openEnvelope, publicKeyPem, sealManifest, signText } from '../../server/exports/sign-manifest.ts'
import { verifyKit } from '../../server/exports/verify-kit.ts'
import { encodeImage } from '../../shared/registers/encode-image.ts'
import { firmware, firmwareText } from '../registers/a-schema.ts'
import { inDirectory, run, write } from './outside-tools.ts'

const schema = firmware('hinge-2.1.0')

function input(): ManifestInput {
  const joints = ['L1 knee', 'R1 knee'].map((joint, k) => {
    const encoded = encodeImage(schema, { busAddress: 0x33 + 8 * k }, { release: 7 })
    if (encoded.kind === 'refused') throw new Error(encoded.problems[0].message)
    const context: ExportContext = {
      machine: 'Dunlin', joint, firmware: { line: 'hinge', version: '2.1.0' }, status: { kind: 'release', version: '1.7.0', sequence: 7 }, device: 0x33 + 8 * k, toolVersion: '0.1.0',
    }
    return {
      files: jointFiles(schema, encoded, context),
      entry: {
        joint, family: 'knee', bus: 'fore', address: 0x33 + 8 * k, revision: 12, imageSha256: sha256(encoded.image), board: null,
        firmware: { line: 'hinge', version: '2.1.0', schemaSha256: sha256(firmwareText('hinge-2.1.0')), imageSha256: null },
      },
    }
  })
  return {
    toolVersion: '0.1.0',
    release: { machine: 'Dunlin', version: '1.7.0', sequence: 7, releasedAt: '2026-11-12T13:15:00Z', contentHash: sha256('content'), reason: 'Knee current limit after the gear train of October' },
    signatures: [{ person: 'Rafiq Sandoval', meaning: 'peer review', signedAt: '2026-11-11T09:30:00Z', contentHash: sha256('content') }],
    verdicts: [{ joint: 'L1 knee', verdict: 'stable', rho: 0.99631 }],
    concessions: [],
    joints: joints.map((j) => j.entry),
    files: [...joints.flatMap((j) => j.files), { path: firmwarePath('hinge', '2.1.0', 'bin'), bytes: Uint8Array.from({ length: 4096 }, (_, k) => (k * 7) & 255) }],
  }
}

let key: KeyObject
let zip: Uint8Array
let pem: string
beforeAll(() => {
  key = generateKeyPairSync('ed25519').privateKey
  pem = publicKeyPem(key)
  const { files, signed } = signKit(input(), key)
  zip = packKit(files, signed)
})

/** The kit with some files changed, taken out (null) or added, zipped again. */
const altered = (changes: Record<string, Uint8Array | null>): Uint8Array => {
  const files = { ...unzipSync(zip), ...changes }
  return zipSync(Object.fromEntries(Object.entries(files).filter((entry): entry is [string, Uint8Array] => entry[1] !== null)))
}
const text = (name: string): string => new TextDecoder().decode(unzipSync(zip)[name])
/** The kit with another manifest, everything signed with the same key again: what a maker of kits could do. */
const signedAnew = (manifest: string): Uint8Array => {
  const own = { 'manifest.json': new TextEncoder().encode(manifest), 'manifest.sig': signText(manifest, key), 'manifest.dsse.json': new TextEncoder().encode(sealManifest(manifest, key)) }
  const files = { ...unzipSync(zip), ...own }
  const sums = sumLines(Object.entries(files).filter(([path]) => !path.startsWith('SHA256SUMS')).map(([path, bytes]) => ({ path, bytes })))
  return zipSync({ ...files, SHA256SUMS: new TextEncoder().encode(sums), 'SHA256SUMS.sig': signText(sums, key) })
}
const twice = (): object => {
  const statement = JSON.parse(text('manifest.json')) as { subject: unknown[] }
  return { ...statement, subject: [...statement.subject, statement.subject[0]] }
}
const problems = (kit: Uint8Array, trusted: string | null = pem): string => {
  const result = verifyKit(kit, trusted)
  return result.kind === 'refused' ? result.problems.join('\n') : 'verified'
}

describe('a kit', () => {
  it('is the same bytes each time, and again from what is stored', () => {
    const { files, signed } = signKit(input(), key)
    expect(sha256(packKit(files, signed))).toBe(sha256(zip))
    const again = [...input().files, readmeFor(input().release, signed.publicKey)].reverse()
    expect(sha256(packKit(again, signed))).toBe(sha256(zip))
  })

  it('proves itself with the commands its README gives, openssl and sha256sum alone', () => {
    inDirectory((path) => {
      const files = unzipSync(zip)
      for (const [name, bytes] of Object.entries(files)) {
        mkdirSync(dirname(path(name)), { recursive: true })
        write(path(name), bytes)
      }
      const commands = Buffer.from(files['README.txt']).toString().split('\n').map((line) => line.trim()).filter((line) => /^(openssl|sha256sum) /.test(line))
      expect(commands).toHaveLength(4)
      const said = commands.map((command) => run('sh', ['-c', `cd '${path('.')}' && ${command}`]).toString())
      expect(said[0]).toContain(keyId(key))
      expect(said[1]).toContain('Signature Verified Successfully')
      expect(said[2]).toContain('Signature Verified Successfully')
      expect(said[3].trim().split('\n')).toHaveLength(Object.keys(files).length - 2)
      expect(said[3]).not.toMatch(/FAILED/)
      // the same commands notice a changed image and a changed manifest
      write(path('joints/L1-knee/Dunlin_L1-knee_1.7.0.bin'), new Uint8Array(128))
      write(path('manifest.json'), `${Buffer.from(files['manifest.json']).toString()} `)
      expect(() => run('sh', ['-c', `cd '${path('.')}' && ${commands[2]}`])).toThrow()
      expect(() => run('sh', ['-c', `cd '${path('.')}' && ${commands[3]}`])).toThrow()
    })
  })

  it('is verified offline, with the given key or its own', () => {
    const release = { machine: 'Dunlin', version: '1.7.0', sequence: 7, files: 18 }
    expect(verifyKit(zip, pem)).toEqual({ kind: 'verified', keyId: keyId(key), keyTrusted: true, release })
    expect(verifyKit(zip, null)).toMatchObject({ kind: 'verified', keyTrusted: false })
  })

  it('names every file, the release, the signatures, the verdicts and the tool in canonical JSON', () => {
    const manifest = Buffer.from(unzipSync(zip)['manifest.json']).toString()
    const read = JSON.parse(manifest) as { subject: { name: string; digest: { sha256: string } }[]; predicate: Record<string, unknown> }
    expect(read.subject.map((s) => s.name)).toContain('firmware/hinge-2.1.0.bin')
    expect(read.predicate).toMatchObject({ release: { sequence: 7 }, tool: { version: '0.1.0' }, exporter: 1, verdicts: [{ rho: 0.99631 }], signatures: [{ person: 'Rafiq Sandoval' }] })
    // RFC 8785: no space outside texts, keys in order
    expect(manifest.startsWith('{"_type":"https://in-toto.io/Statement/v1","predicate":{"caution":')).toBe(true)
  })
})

describe('a kit that was meddled with', () => {
  const image = 'joints/L1-knee/Dunlin_L1-knee_1.7.0.bin'
  it.each<[string, () => Uint8Array, RegExp]>([
    ['a changed image', () => altered({ [image]: new Uint8Array(128) }), /L1-knee_1\.7\.0\.bin is not the file that was signed/],
    ['a missing file', () => altered({ [image]: null }), /is missing/],
    ['an added file', () => altered({ 'joints/extra.bin': new Uint8Array(1) }), /extra\.bin is not in the manifest/],
    ['a changed manifest', () => altered({ 'manifest.json': new TextEncoder().encode('{}') }), /manifest\.sig is no signature/],
    ['a changed README', () => altered({ 'README.txt': new Uint8Array(3) }), /README\.txt is not the file/],
    ['no signature', () => altered({ 'manifest.sig': null }), /lacks manifest\.sig/],
    ['an emptied signature', () => altered({ 'manifest.sig': new Uint8Array(64) }), /no signature of manifest\.json/],
    ['another key in the kit', () => altered({ 'public-key.pem': new TextEncoder().encode(publicKeyPem(generateKeyPairSync('ed25519').privateKey)) }), /not the given key/],
    ['an envelope of something else', () => altered({ 'manifest.dsse.json': new TextEncoder().encode(sealManifest('{}', key)) }), /another manifest/],
    ['sums that were signed by nobody', () => altered({ SHA256SUMS: new Uint8Array(2) }), /SHA256SUMS/],
    ['a mark before the sums, which sha256sum would see', () => altered({ SHA256SUMS: Buffer.concat([Buffer.from('\ufeff'), Buffer.from(unzipSync(zip).SHA256SUMS)]) }), /SHA256SUMS/],
    ['a manifest that is no text', () => altered({ 'manifest.json': new Uint8Array([0xff, 0xfe]) }), /manifest\.json is no text in UTF-8/],
    ['a manifest of nothing, signed by whoever made the kit', () => signedAnew('null'), /no release manifest/],
    ['a manifest whose subjects are nothing', () => signedAnew(JSON.stringify({ ...JSON.parse(text('manifest.json')) as object, subject: [null] })), /An entry of the manifest names no file/],
    ['a manifest that names a file twice', () => signedAnew(JSON.stringify(twice())), /stands in the manifest twice/],
    ['a path that leaves the directory', () => altered({ '../evil': new Uint8Array(1) }), /leave the directory/],
    ['no zip', () => new TextEncoder().encode('no zip at all'), /no zip/],
    ['a cut zip', () => zip.slice(0, zip.length >> 1), /cannot be read/],
    ['nothing', () => new Uint8Array(), /no zip/],
  ])('%s is refused', (_what, kit, message) => {
    expect(problems(kit())).toMatch(message)
  })

  it('is refused under another workplace’s key', () => {
    expect(problems(zip, publicKeyPem(generateKeyPairSync('ed25519').privateKey))).toMatch(/not the given key/)
    expect(problems(zip, 'no key')).toMatch(/no Ed25519 public key/)
    expect(problems(zip, publicKeyPem(generateKeyPairSync('ec', { namedCurve: 'P-256' }).privateKey))).toMatch(/no Ed25519 public key/)
  })

  it('a zip bomb is refused before it unpacks', () => {
    const bomb = zipSync({ 'a.bin': new Uint8Array(40_000_000) }, { level: 9 })
    expect(bomb.length).toBeLessThan(100_000)
    expect(readZip(bomb, { packed: 1e6, unpacked: 1e6, entries: 10 })).toMatchObject({ kind: 'refused', message: expect.stringMatching(/unpack to more/) })
    // the same, with a directory that announces 1 kB: nothing past the announced size is kept
    const view = new DataView(bomb.buffer, bomb.byteOffset)
    const directory = view.getUint32(bomb.length - 6, true)
    view.setUint32(directory + 24, 1000, true)
    const read = readZip(bomb, { packed: 1e6, unpacked: 1e6, entries: 10 })
    expect(read.kind === 'files' ? read.files.get('a.bin')!.length : 0).toBeLessThanOrEqual(1000)
    const many = zipSync(Object.fromEntries(Array.from({ length: 11 }, (_, k) => [`f${k}`, new Uint8Array(1)])))
    expect(readZip(many, { packed: 1e6, unpacked: 1e6, entries: 10 })).toMatchObject({ kind: 'refused' })
  })
})

describe('signing', () => {
  it('packs nothing that differs from the manifest', () => {
    const { files, signed } = signKit(input(), key)
    const [first, ...rest] = files
    expect(() => packKit([{ ...first, bytes: new Uint8Array(1) }, ...rest], signed)).toThrow(/not the file that the manifest names/)
    expect(() => packKit(rest, signed)).toThrow(/is missing/)
  })

  it.each(['../x', '/x', 'a//b', 'a b', 'a\\b', '', 'ü'])('refuses the path %j', (path) => {
    expect(() => buildManifest({ ...input(), files: [{ path, bytes: new Uint8Array() }] })).toThrow(RangeError)
  })

  it('refuses two paths that differ in case alone, and numbers that JSON cannot hold', () => {
    const file = (path: string): { path: string; bytes: Uint8Array } => ({ path, bytes: new Uint8Array() })
    expect(() => buildManifest({ ...input(), files: [file('a'), file('A')] })).toThrow(/twice/)
    expect(() => buildManifest({ ...input(), verdicts: [{ rho: NaN }] })).toThrow(/NaN/)
  })

  it('signs with a private Ed25519 key alone', () => {
    expect(() => signText('x', generateKeyPairSync('ec', { namedCurve: 'P-256' }).privateKey)).toThrow(TypeError)
    expect(() => sealManifest('x', createPublicKey(key))).toThrow(TypeError)
  })

  it('opens an envelope only for its key, type and content', () => {
    const envelope = sealManifest('{"a":1}', key)
    expect(openEnvelope(envelope, createPublicKey(key))).toEqual({ kind: 'sealed', manifest: '{"a":1}' })
    expect(openEnvelope(envelope, createPublicKey(generateKeyPairSync('ed25519').privateKey)).kind).toBe('refused')
    const read = JSON.parse(envelope) as Record<string, unknown>
    expect(openEnvelope(JSON.stringify({ ...read, payloadType: 'text/plain' }), createPublicKey(key)).kind).toBe('refused')
    expect(openEnvelope(JSON.stringify({ ...read, payload: 'e30=' }), createPublicKey(key)).kind).toBe('refused')
    for (const text of ['', 'null', '[]', '{"payload":1}']) expect(openEnvelope(text, createPublicKey(key)).kind).toBe('refused')
  })

  it('seals as openssl signs the pre-authentication encoding', () => {
    inDirectory((path) => {
      const payload = '{"a":"ü"}'
      write(path('key.pem'), key.export({ type: 'pkcs8', format: 'pem' }).toString())
      // DSSE v1: "DSSEv1" SP LEN(type) SP type SP LEN(body) SP body, lengths in bytes
      write(path('pae'), `DSSEv1 28 application/vnd.in-toto+json 10 ${payload}`)
      const theirs = run('openssl', ['pkeyutl', '-sign', '-inkey', path('key.pem'), '-rawin', '-in', path('pae')]).toString('base64')
      const [signature] = (JSON.parse(sealManifest(payload, createPrivateKey(key.export({ type: 'pkcs8', format: 'pem' })))) as { signatures: { sig: string }[] }).signatures
      expect(signature.sig).toBe(theirs)
    })
  })
})
