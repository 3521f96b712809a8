import { parseArgs } from 'node:util'
import { normalEmail } from '../modules/people/check-credentials.ts'
import { Person } from '../modules/people/person.entity.ts'
import { resetSecondFactor } from '../modules/people/second-factor/reset-second-factor.ts'
import { onDatabase } from './on-database.ts'
import { Usage } from './usage.ts'

/** Takes away the second factor of somebody whom no administrator can help, as the last administrator without app and recovery codes. */
export async function secondFactor(args: string[]): Promise<number> {
  const { positionals } = parseArgs({ args, allowPositionals: true, options: {} })
  if (positionals.length !== 2 || positionals[0] !== 'reset') throw new Usage('second-factor takes "reset" and an e-mail address.')
  const email = normalEmail(positionals[1])
  const name = await onDatabase((orm) =>
    orm.em.fork().transactional(async (em) => {
      const whom = await em.findOne(Person, { email })
      if (!whom) throw new Error(`Nobody here has the address ${email}. Nothing was altered.`)
      await resetSecondFactor(em, { whom, person: null, now: new Date() })
      return whom.name
    }),
  )
  process.stdout.write(`The second factor of ${name} is taken away, and their sessions have ended; the ledger and a mail to them say so. If they sign, another signer has to confirm them.\n`)
  return 0
}
