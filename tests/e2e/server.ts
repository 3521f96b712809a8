import { spawn, spawnSync, type ChildProcess } from 'node:child_process'
import { mkdtempSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'

export interface RunningServer {
  url: string
  dataDir: string
  /** what it printed when it began to serve */
  greeting: string
  stop(): Promise<void>
}

/** Builds what is out of date, then runs the program as `npm start` does, on a free port of loopback with a data folder of its own. */
export async function startServer(env: NodeJS.ProcessEnv = {}): Promise<RunningServer> {
  const built = spawnSync(process.execPath, ['server/launch.mjs', '--build-only'], { stdio: ['ignore', 'inherit', 'inherit'] })
  if (built.status !== 0) throw new Error('the build failed; see above')
  const dataDir = env.DETENT_DATA ?? mkdtempSync(join(tmpdir(), 'detent-e2e-'))
  const child = spawn(process.execPath, ['server/launch.mjs'], { env: { ...process.env, DETENT_PORT: '0', DETENT_DATA: dataDir, ...env }, stdio: ['ignore', 'pipe', 'inherit'] })
  const greeting = await firstLine(child)
  const url = /http:\/\/\S+/.exec(greeting)![0]
  return { url, dataDir, greeting, stop: () => stop(child) }
}

function firstLine(child: ChildProcess): Promise<string> {
  return new Promise((done, fail) => {
    let text = ''
    child.stdout!.on('data', (data: Buffer) => {
      text += String(data)
      if (/http:\/\/\S+\n/.test(text)) done(text)
    })
    child.once('exit', (code) => fail(new Error(`the server ended with ${code} before it served`)))
  })
}

function stop(child: ChildProcess): Promise<void> {
  return new Promise((done) => {
    if (child.exitCode !== null) return done()
    child.once('exit', () => done())
    child.kill('SIGTERM')
  })
}
