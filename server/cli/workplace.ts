import { parseArgs } from 'node:util'
import { readConfig } from '../config.ts'
import { foundWorkplace } from '../modules/people/found-workplace.ts'
import { onDatabase } from './on-database.ts'
import { Usage } from './usage.ts'

/** Makes the first administrator of an empty workplace and prints the link by which they set their password. */
export async function workplace(args: string[]): Promise<number> {
  const { positionals } = parseArgs({ args, allowPositionals: true, options: {} })
  if (positionals.length !== 2 || !positionals[1].includes('@')) throw new Usage('workplace takes a name and an e-mail address.')
  const [name, email] = positionals
  const { baseUrl } = readConfig(process.env)
  const link = await onDatabase((orm) => orm.em.fork().transactional((em) => foundWorkplace(em, { name, email, baseUrl, now: new Date() })))
  process.stdout.write(`${name} is the administrator of this workplace. Start the server, then open this link once to set the password:\n${link}\n`)
  return 0
}
