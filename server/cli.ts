import { Usage } from './cli/usage.ts'

interface Command {
  usage: string
  does: string
  run: (args: string[]) => Promise<number>
}

/** Each command loads what it needs when it is called: `help` needs no database. */
const commands: Record<string, Command> = {
  check: { usage: 'check FILE [--json] [--schemas DIR]', does: 'checks every joint of a machine set', run: async (args) => (await import('./cli/check.ts')).check(args) },
  image: { usage: 'image FILE --format bin|hex|srec|h|csv|json|write-list|systemrdl --out PATH [--joint KEY] [--release N] [--schemas DIR]', does: 'writes the register image of one joint', run: async (args) => (await import('./cli/image.ts')).image(args) },
  readback: { usage: 'readback DUMP --schema SCHEMA [--against FILE] [--joint KEY] [--format bin|hex|srec|csv] [--release N]', does: 'decodes a dump of a board, or names every register in which it differs from a set or image', run: async (args) => (await import('./cli/readback.ts')).readback(args) },
  kit: { usage: 'kit verify KIT.zip [--key PUBLIC.pem]', does: 'proves a release kit, offline', run: async (args) => (await import('./cli/kit.ts')).kit(args) },
  cases: { usage: 'cases FILE', does: 'runs reference cases of the control model', run: async (args) => (await import('./cli/cases.ts')).cases(args) },
  bench: { usage: 'bench [--json]', does: 'prints the performance figures of this machine', run: async (args) => (await import('./cli/bench.ts')).bench(args) },
  workplace: { usage: 'workplace NAME EMAIL', does: 'makes the first administrator of an empty workplace', run: async (args) => (await import('./cli/workplace.ts')).workplace(args) },
  'second-factor': { usage: 'second-factor reset EMAIL', does: 'takes away the second factor of somebody whom no administrator can help', run: async (args) => (await import('./cli/second-factor.ts')).secondFactor(args) },
  ledger: { usage: 'ledger verify [--checkpoints FILE] [--key PEM] | ledger checkpoints', does: "walks the ledger's chain, holds checkpoints against it and names the first entry that does not hold; or prints the checkpoints, to be kept elsewhere", run: async (args) => (await import('./cli/ledger.ts')).ledger(args) },
  backup: { usage: 'backup [--with-private-key] | backup --list', does: 'makes a backup of a workplace that no server uses, or lists those made', run: async (args) => (await import('./cli/backup.ts')).backup(args) },
  restore: { usage: 'restore BACKUP [--only-prove]', does: 'proves a backup, then puts it in the place of the database, which is kept aside', run: async (args) => (await import('./cli/restore.ts')).restore(args) },
}

const help = () =>
  `Detent on the command line: npm run -s detent -- COMMAND\n\n${Object.values(commands).map((c) => `  ${c.usage}\n      ${c.does}`).join('\n')}\n\nA machine set is what the text view of a change shows; examples/README.md says how it is written.\n`

/** Names and pointers come from files: what would steer a terminal is shown as its code. */
const printable = (text: string) => text.replace(/[\u0000-\u0008\u000b-\u001f\u007f-\u009f\u2028\u2029\u202a-\u202e\u2066-\u2069]/g, (c) => `\\u${c.charCodeAt(0).toString(16).padStart(4, '0')}`)

async function main(): Promise<number> {
  const [name, ...args] = process.argv.slice(2)
  if (name === undefined || name === 'help' || name === '--help') {
    process.stdout.write(help())
    return name === undefined ? 2 : 0
  }
  const command = Object.hasOwn(commands, name) ? commands[name] : undefined
  if (!command) {
    process.stderr.write(`There is no command "${name}".\n\n${help()}`)
    return 2
  }
  try {
    return await command.run(args)
  } catch (error) {
    const usage = error instanceof Usage || (error as NodeJS.ErrnoException).code?.startsWith('ERR_PARSE_ARGS')
    process.stderr.write(`${printable((error as Error).message)}\n${usage ? `usage: ${command.usage}\n` : ''}`)
    return usage ? 2 : 1
  }
}

process.exitCode = await main()
