// `npm start`: builds client and server when their sources changed since the last build, then runs the server in this very process, so that
// signals reach it. Building happens in child processes: bundling in here would keep its memory for as long as the server runs.
import { createHash } from 'node:crypto'
import { existsSync, readdirSync, readFileSync, writeFileSync } from 'node:fs'
import { spawn } from 'node:child_process'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'

const root = fileURLToPath(new URL('..', import.meta.url))
const stampFile = join(root, '.build', 'stamp')

function* filesUnder(path) {
  for (const entry of readdirSync(path, { withFileTypes: true }).sort((a, b) => (a.name < b.name ? -1 : 1))) {
    const child = join(path, entry.name)
    if (entry.isDirectory()) yield* filesUnder(child)
    else yield child
  }
}

function stamp() {
  const hash = createHash('sha256').update(process.version)
  const tops = ['package-lock.json', 'vite.config.ts', 'index.html']
  const files = [...tops.map((t) => join(root, t)), ...['src', 'server', 'shared', 'schemas'].flatMap((d) => [...filesUnder(join(root, d))])]
  for (const file of files) hash.update(file.slice(root.length)).update('\0').update(readFileSync(file)).update('\0')
  return hash.digest('hex')
}

const run = (args) =>
  new Promise((done, fail) => {
    const child = spawn(process.execPath, [join(root, 'node_modules/vite/bin/vite.js'), ...args], { cwd: root, stdio: ['ignore', 'ignore', 'inherit'], env: { ...process.env, NODE_ENV: 'production' } })
    child.on('error', fail)
    child.on('exit', (code) => (code === 0 ? done() : fail(new Error(`vite ${args.join(' ')} ended with ${code}; see the lines above.`))))
  })

/** Builds what is out of date; says nothing when nothing is. The server is there first, and can begin while the client is still being built. */
async function build() {
  const now = stamp()
  if (existsSync(stampFile) && readFileSync(stampFile, 'utf8') === now) return { client: Promise.resolve() }
  console.error('Building Detent …')
  const client = run(['build', '--logLevel', 'error'])
  const server = run(['build', '--mode', 'server', '--logLevel', 'error'])
  const both = Promise.all([client, server]).then(() => writeFileSync(stampFile, now))
  both.catch(() => {})
  await server
  return { client: both }
}

const failed = (error) => {
  console.error(error.message)
  process.exit(1)
}

const { client } = await build().catch(failed)
client.catch(failed)
if (process.argv.includes('--build-only')) await client
else await (await import('../.build/server/main.js')).serve(client)
