import { describe, expect, it } from 'vitest'
import type { BoardSummary, JointBoard, MachineBoards } from '../../shared/contract/boards.ts'
import { dumpOfFile } from '../../src/features/boards/dump-of-file.ts'
import { notReadBack } from '../../src/features/boards/known-words.ts'
import { mostPressingFirst } from '../../src/features/boards/most-pressing.ts'
import { whatWasScanned } from '../../src/features/boards/what-was-scanned.ts'
import { curlExamples } from '../../src/features/bench-keys/curl-lines.ts'
import type { ApiProblem } from '../../src/lib/api-client.ts'

const board = (serial: string): BoardSummary => ({ serial, machine: 'dunlin', machineName: 'Dunlin', joint: null, firmware: null, release: '1.7.0', imageOf: null, known: 'recorded', knownAt: null, knownBy: null, state: 'current', why: '', retired: false })
const joint = (key: string, edit: Partial<JointBoard> = {}): JointBoard => ({ joint: key, name: key.replace('-', ' ').toUpperCase(), bus: 'aft', address: 0x39, revision: 9, board: null, calibratedFor: null, state: 'unknown', why: '', readBack: null, ...edit })
const machine = (joints: JointBoard[], off: BoardSummary[] = []): MachineBoards => ({ machine: 'dunlin', machineName: 'Dunlin', current: null, newest: null, joints, off, counts: { current: 0, outdated: 0, 'withdrawn release on board': 0, 'bench set on board': 0, unknown: 0, 'read-back differs': 0, 'not calibrated for this joint': 0 }, mayRecord: { allowed: true } })

describe('what was scanned', () => {
  const boards = machine([joint('r3-yaw', { board: board('H-0258'), calibratedFor: 'H-0258' }), joint('r3-hip', { calibratedFor: 'H-0299' })], [board('H-0361')])

  it.each([
    ['a board at its joint', 'H-0258', { kind: 'joint', joint: 'r3-yaw', serial: 'H-0258' }],
    ['in other letters, with what a scanner adds', ' h-0258\t', { kind: 'joint', joint: 'r3-yaw', serial: 'H-0258' }],
    ['a board that the values of a joint were measured on', 'H-0299', { kind: 'joint', joint: 'r3-hip', serial: 'H-0299' }],
    ['a joint by its name', 'r3 hip', { kind: 'joint', joint: 'r3-hip', serial: null }],
    ['a joint by its key', 'r3-yaw', { kind: 'joint', joint: 'r3-yaw', serial: null }],
    ['a board off its joint', 'h-0361', { kind: 'board', serial: 'H-0361', words: 'H-0361 sits at no joint; pick the one it goes to.' }],
    ['a board that is new', 'H-0777', { kind: 'board', serial: 'H-0777', words: 'H-0777 is new on Dunlin; pick the joint it goes to.' }],
    ['neither', 'two words!', { kind: 'nothing', words: '"two words!" is no joint of Dunlin and no serial number.' }],
  ])('%s', (_name, typed, found) => expect(whatWasScanned(typed, boards)).toEqual(found))
})

describe('the order of work', () => {
  it('begins with what must not run, and keeps those alike in their order', () => {
    const joints = [joint('a', { state: 'current' }), joint('b', { state: 'unknown' }), joint('c', { state: 'withdrawn release on board' }), joint('d', { state: 'outdated' }), joint('e', { state: 'withdrawn release on board' }), joint('f', { state: 'read-back differs' })]
    expect(mostPressingFirst(joints).map((j) => j.joint)).toEqual(['c', 'e', 'f', 'd', 'b', 'a'])
  })

  it('counts as not read back what holds something on record alone', () => {
    const boards = machine([joint('a', { board: board('H-1') }), joint('b', { board: board('H-2'), readBack: { verdict: 'equal', at: '', by: '' } }), joint('c'), joint('d', { board: { ...board('H-3'), release: null } })])
    expect(notReadBack(boards).map((j) => j.joint)).toEqual(['a'])
  })
})

describe('a chosen file', () => {
  it('is sent as base64, every byte of it', async () => {
    const bytes = Uint8Array.from({ length: 70_000 }, (_, i) => (i * 31) & 255)
    const dump = await dumpOfFile(new File([bytes], 'board.bin'))
    expect(dump.fileName).toBe('board.bin')
    expect(Buffer.from(dump.content, 'base64').equals(Buffer.from(bytes))).toBe(true)
  })

  it('is refused above 1 MiB before it is sent', async () => {
    const refused = await dumpOfFile(new File([new Uint8Array(1_048_577)], 'board.bin')).then(() => null, (e: ApiProblem) => e)
    expect(refused?.detail).toMatch(/^board\.bin has .+; a dump has at most .+\. Nothing was recorded\.$/)
    await expect(dumpOfFile(new File([new Uint8Array(1_048_576)], 'board.bin'))).resolves.toMatchObject({ fileName: 'board.bin' })
  })
})

describe('lines for a shell', () => {
  it('hold no text that ends its own quotes', () => {
    const lines = curlExamples({ origin: "http://x'; rm -rf ~; '", secret: "a'b", machine: 'dunlin', version: '1.0.0', joint: 'l1-knee', serial: 'H-1' }).map((e) => e.lines)
    expect(lines[0]).toBe("export DETENT_KEY='a'\\''b'")
    expect(lines[1]).toContain("'http://x'\\''; rm -rf ~; '\\''/api/machines/dunlin/boards'")
  })
})
