import { createHash, randomBytes } from 'node:crypto'
import { mkdtempSync, readdirSync, readFileSync, rmSync, statSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { Readable } from 'node:stream'
import { afterAll, describe, expect, it } from 'vitest'
import { FileTooLarge, fileStore, StoredFileProblem } from '../../server/db/file-store.ts'

const folders: string[] = []
const aFolder = () => {
  const folder = mkdtempSync(join(tmpdir(), 'detent-files-'))
  folders.push(folder)
  return folder
}
afterAll(() => folders.forEach((f) => rmSync(f, { recursive: true, force: true })))

const shaOf = (bytes: Uint8Array) => createHash('sha256').update(bytes).digest('hex')
const chunked = (bytes: Buffer, size: number) => Readable.from(Array.from({ length: Math.ceil(bytes.length / size) }, (_, k) => bytes.subarray(k * size, (k + 1) * size)))
const placeOf = (folder: string, sha: string) => join(folder, sha.slice(0, 2), sha)

describe('the file store', () => {
  it('gives back what came in pieces, under its SHA-256, readable by its owner alone', async () => {
    const folder = aFolder()
    const store = fileStore(folder)
    const bytes = randomBytes(100_001)
    const received = await store.receive(chunked(bytes, 777), 200_000)
    expect(received).toMatchObject({ sha256: shaOf(bytes), bytes: 100_001 })
    expect((await received.content()).equals(bytes)).toBe(true)
    await store.keep(received)
    expect((await store.read(received.sha256)).equals(bytes)).toBe(true)
    expect(statSync(placeOf(folder, received.sha256)).mode & 0o777).toBe(0o600)
    expect(readdirSync(join(folder, 'aside'))).toEqual([])
  })

  it('has nothing under a name until a file is kept, and nothing at all after it is discarded', async () => {
    const folder = aFolder()
    const store = fileStore(folder)
    const received = await store.receive(Readable.from([Buffer.from('abc')]), 10)
    await expect(store.read(received.sha256)).rejects.toThrow(StoredFileProblem)
    await received.discard()
    await received.discard()
    expect(readdirSync(join(folder, 'aside'))).toEqual([])
  })

  it('takes a file of just the limit, and leaves nothing of a larger one', async () => {
    const folder = aFolder()
    const store = fileStore(folder)
    const bytes = randomBytes(64)
    expect((await store.receive(chunked(bytes, 10), 64)).bytes).toBe(64)
    await expect(store.receive(chunked(randomBytes(65), 10), 64)).rejects.toThrow(FileTooLarge)
    expect(readdirSync(join(folder, 'aside'))).toHaveLength(1)
  })

  it('leaves nothing of a file that breaks off', async () => {
    const folder = aFolder()
    const store = fileStore(folder)
    const broken = new Readable({ read() { this.push(Buffer.from('half')); this.destroy(new Error('the line broke')) } })
    await expect(store.receive(broken, 100)).rejects.toThrow('the line broke')
    expect(readdirSync(join(folder, 'aside'))).toEqual([])
  })

  it('refuses a file that is missing, altered in a bit, or cut off, and names it', async () => {
    const folder = aFolder()
    const store = fileStore(folder)
    const received = await store.receive(Readable.from([Buffer.from('some firmware')]), 100)
    await store.keep(received)
    const path = placeOf(folder, received.sha256)
    const good = readFileSync(path)
    const flipped = Buffer.from(good)
    flipped[4] ^= 1
    for (const bytes of [flipped, good.subarray(0, 5)]) {
      writeFileSync(path, bytes)
      await expect(store.read(received.sha256)).rejects.toMatchObject({ what: 'altered', sha256: received.sha256 })
    }
    rmSync(path)
    await expect(store.read(received.sha256)).rejects.toMatchObject({ what: 'missing', sha256: received.sha256 })
  })

  it('is put right by the same file coming again', async () => {
    const folder = aFolder()
    const store = fileStore(folder)
    const first = await store.receive(Readable.from([Buffer.from('some firmware')]), 100)
    await store.keep(first)
    writeFileSync(placeOf(folder, first.sha256), 'other bytes')
    await store.keep(await store.receive(Readable.from([Buffer.from('some firmware')]), 100))
    expect((await store.read(first.sha256)).toString()).toBe('some firmware')
  })

  it('takes a file away only when nobody has the same bytes in hand', async () => {
    const folder = aFolder()
    const store = fileStore(folder)
    const come = () => store.receive(Readable.from([Buffer.from('some firmware')]), 100)
    const first = await come()
    await store.keep(first)
    expect(await store.remove(first.sha256)).toBe(false)
    const second = await come()
    await first.discard()
    await first.discard()
    expect(await store.remove(first.sha256)).toBe(false)
    await store.keep(second)
    await second.discard()
    expect((await store.read(first.sha256)).toString()).toBe('some firmware')
    expect(await store.remove(first.sha256)).toBe(true)
    await expect(store.read(first.sha256)).rejects.toMatchObject({ what: 'missing' })
    expect(await store.remove(first.sha256)).toBe(true)
    expect(await store.remove('../../etc/passwd')).toBe(false)
  })

  it('keeps what comes while the same bytes are being taken away', async () => {
    const store = fileStore(aFolder())
    const first = await store.receive(Readable.from([Buffer.from('some firmware')]), 100)
    await store.keep(first)
    await first.discard()
    const going = store.remove(first.sha256)
    const second = await store.receive(Readable.from([Buffer.from('some firmware')]), 100)
    await store.keep(second)
    await going
    expect((await store.read(second.sha256)).toString()).toBe('some firmware')
  })

  it('reads nothing outside itself, whatever the name', async () => {
    const store = fileStore(aFolder())
    for (const name of ['../../../etc/passwd', '', 'A'.repeat(64), `${'a'.repeat(63)}/`]) await expect(store.read(name)).rejects.toMatchObject({ what: 'missing' })
  })

  it('clears what a stop left half received when the first file comes, and nothing after', async () => {
    const folder = aFolder()
    await (await fileStore(folder).receive(Readable.from([Buffer.from('left behind')]), 100)).content()
    const store = fileStore(folder)
    const mine = await store.receive(Readable.from([Buffer.from('mine')]), 100)
    await store.receive(Readable.from([Buffer.from('another')]), 100)
    expect(readdirSync(join(folder, 'aside'))).toHaveLength(2)
    expect((await mine.content()).toString()).toBe('mine')
  })
})
