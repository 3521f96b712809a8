import { existsSync, readFileSync, readdirSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { expect, it } from 'vitest'
import { DatabaseInUse, holdDatabase } from '../../server/db/only-process.ts'
import { aFolder } from './a-folder.ts'

const aFile = () => join(aFolder(), 'detent.sqlite')

it('is held once, and free again after', () => {
  const file = aFile()
  const release = holdDatabase(file)
  expect(() => holdDatabase(file)).toThrow(DatabaseInUse)
  expect(() => holdDatabase(file)).toThrow(`process ${process.pid}`)
  release()
  expect(readdirSync(join(file, '..'))).toEqual([])
  holdDatabase(file)()
})

it.each([
  ['a process that is gone', () => '4194305 some-boot 12'],
  ['another process that has its number by now', () => `${process.ppid} ${readFileSync('/proc/sys/kernel/random/boot_id', 'utf8').trim()} 1`],
  ['a process of before the machine started anew', () => `${process.ppid} 00000000-0000-0000-0000-000000000000 ${readFileSync(`/proc/${process.ppid}/stat`, 'utf8').replace(/^.*\)/s, '').trim().split(' ')[19]}`],
  ['an earlier process of this very number', () => `${process.pid} 00000000-0000-0000-0000-000000000000 12`],
  ['nobody', () => ''],
  ['words', () => 'words'],
])('is taken over from %s', (_who, text) => {
  const file = aFile()
  writeFileSync(`${file}.lock`, text())
  const release = holdDatabase(file)
  expect(readFileSync(`${file}.lock`, 'utf8')).toMatch(new RegExp(`^${process.pid} `))
  release()
  expect(existsSync(`${file}.lock`)).toBe(false)
})

it('is not taken from a process that still runs', () => {
  const file = aFile()
  const began = readFileSync(`/proc/${process.ppid}/stat`, 'utf8').replace(/^.*\)/s, '').trim().split(' ')[19]
  const theirs = `${process.ppid} ${readFileSync('/proc/sys/kernel/random/boot_id', 'utf8').trim()} ${began}`
  writeFileSync(`${file}.lock`, theirs)
  expect(() => holdDatabase(file)).toThrow(`process ${process.ppid}`)
  expect(readFileSync(`${file}.lock`, 'utf8')).toBe(theirs)
})

it('leaves a lock alone that another has taken meanwhile', () => {
  const file = aFile()
  const release = holdDatabase(file)
  writeFileSync(`${file}.lock`, '12 theirs 3')
  release()
  expect(readFileSync(`${file}.lock`, 'utf8')).toBe('12 theirs 3')
})
