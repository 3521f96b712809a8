// Bundles the child process of the reliability tests, so that it starts fast: `node tests/reliability/build-child.mjs OUT`.
import { fileURLToPath } from 'node:url'
import { build } from 'vite'

const here = (file) => fileURLToPath(new URL(file, import.meta.url))
await build({
  configFile: false,
  root: here('../..'),
  logLevel: 'error',
  build: { ssr: true, target: 'node20', outDir: process.argv[2], emptyOutDir: true, minify: false, rollupOptions: { input: { child: here('child.ts'), main: here('../../server/main.ts'), worker: here('../../server/jobs/worker.ts'), cli: here('../../server/cli.ts') } } },
})
