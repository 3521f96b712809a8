import { spawnSync } from 'node:child_process'
import { mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { openDatabase, type Orm } from '../../server/db/orm.ts'
import { LedgerEntry } from '../../server/modules/ledger/ledger-entry.entity.ts'
import { Mail } from '../../server/modules/mail/mail.entity.ts'
import { hashPassword } from '../../server/modules/people/passwords.ts'
import { Person } from '../../server/modules/people/person.entity.ts'
import { RoleGrant } from '../../server/modules/people/role-grant.entity.ts'
import { RecoveryCode } from '../../server/modules/people/second-factor/recovery-code.entity.ts'

/** Commands on a workplace of their own, as its operator runs them: with the database on disk and no server. */
const folder = mkdtempSync(join(tmpdir(), 'detent-cli-'))
const now = new Date('2026-03-02T09:00:00Z')
const detent = (...args: string[]) => {
  const { status, stdout, stderr } = spawnSync(process.execPath, ['node_modules/tsx/dist/cli.mjs', 'server/cli.ts', ...args], { encoding: 'utf8', env: { ...process.env, DETENT_DATA: folder, DETENT_MODE: 'workplace' } })
  return { status, stdout, stderr }
}

async function onDisk<T>(work: (orm: Orm) => Promise<T>): Promise<T> {
  const orm = await openDatabase(join(folder, 'detent.sqlite'))
  try {
    return await work(orm)
  } finally {
    await orm.close(true)
  }
}

beforeAll(() =>
  onDisk(async (orm) => {
    const em = orm.em.fork()
    const person = em.create(Person, { name: 'Silvan Okoro', email: 'silvan@dunlin.example', passwordHash: await hashPassword('a long enough password'), createdAt: now, secondFactor: '1.sealed', secondFactorAt: now, secondFactorStep: 1 })
    em.create(RoleGrant, { person, role: 'administrator', machine: null, grantedAt: now })
    em.create(RoleGrant, { person, role: 'release manager', machine: null, grantedAt: now, confirmedAt: now })
    em.create(RecoveryCode, { person, codeHash: 'ab'.repeat(32), createdAt: now, usedAt: null })
    await em.flush()
  }),
)
afterAll(() => rmSync(folder, { recursive: true }))

describe('second-factor reset', () => {
  it('says what it takes, and whom it does not know', () => {
    expect(detent('second-factor')).toMatchObject({ status: 2, stderr: expect.stringContaining('usage: second-factor reset EMAIL') })
    expect(detent('second-factor', 'reset', 'nobody@dunlin.example')).toMatchObject({ status: 1, stderr: expect.stringContaining('Nobody here has the address nobody@dunlin.example. Nothing was altered.') })
  })

  it('takes it away with an entry, a mail and held signatures; a second time there is none', async () => {
    expect(detent('second-factor', 'reset', ' Silvan@dunlin.example')).toMatchObject({ status: 0, stderr: '', stdout: expect.stringContaining('The second factor of Silvan Okoro is taken away') })
    await onDisk(async (orm) => {
      const em = orm.em.fork()
      expect(await em.findOneOrFail(Person, { email: 'silvan@dunlin.example' }, { populate: ['secondFactor'] })).toMatchObject({ secondFactor: null, secondFactorAt: null, signingHold: 'second factor reset', signingHeldBy: null })
      expect(await em.count(RecoveryCode)).toBe(0)
      expect(await em.find(LedgerEntry, { act: 'second factor reset' })).toMatchObject([{ personId: null, personName: 'Detent', subject: { person: 'Silvan Okoro' } }])
      expect(await em.find(Mail, {})).toMatchObject([{ to: 'silvan@dunlin.example', text: expect.stringContaining('The operator of the server') }])
    })
    expect(detent('second-factor', 'reset', 'silvan@dunlin.example')).toMatchObject({ status: 1, stderr: expect.stringContaining('has no second factor') })
  })
})

describe('ledger verify', () => {
  it('names the first entry that does not hold, and exits with 1', async () => {
    expect(detent('ledger', 'verify')).toMatchObject({ status: 0, stdout: expect.stringContaining('The chain holds: 1 entries') })
    await onDisk(async (orm) => {
      const run = (sql: string) => orm.em.getConnection().execute(sql)
      for (const { name } of (await run("select name from sqlite_master where type = 'trigger' and tbl_name = 'ledger_entry'")) as { name: string }[]) await run(`drop trigger "${name}"`)
      await run("update ledger_entry set person_name = 'Nobody' where sequence = 1")
    })
    const { status, stdout } = detent('ledger', 'verify')
    expect(status).toBe(1)
    expect(stdout).toContain('The chain breaks at entry 1')
    expect(stdout).toContain('0 entries before it hold')
  })
})
