import { fileURLToPath } from 'node:url'
import { defineConfig } from 'vite'
import type { ViteUserConfig } from 'vitest/config'
import react from '@vitejs/plugin-react'
import tailwindcss from '@tailwindcss/vite'

/** Tests run by `npm test`; those in tests/e2e drive the built program in Chromium and run one file at a time. */
const test: ViteUserConfig['test'] = {
  projects: [
    {
      test: {
        name: 'unit',
        include: ['tests/**/*.test.ts', 'tests/**/*.test.tsx'],
        exclude: ['tests/e2e/**'],
        testTimeout: 60_000,
        hookTimeout: 60_000,
        maxWorkers: 2,
      },
    },
    {
      test: {
        name: 'e2e',
        include: ['tests/e2e/**/*.test.ts'],
        testTimeout: 180_000,
        hookTimeout: 180_000,
        fileParallelism: false,
      },
    },
  ],
}

const production = (file: string) => fileURLToPath(new URL(`node_modules/react-router/dist/production/${file}`, import.meta.url))

/** `vite build` makes the client; `vite build --mode server` bundles the server, its worker and the command line for plain node. */
export default defineConfig(({ mode }) =>
  mode === 'server'
    ? {
        build: {
          ssr: true,
          target: 'node20',
          outDir: '.build/server',
          emptyOutDir: true,
          sourcemap: true,
          rollupOptions: { input: { main: 'server/main.ts', worker: 'server/jobs/worker.ts' } },
        },
      }
    : {
        plugins: [react(), tailwindcss()],
        // The package points every bundler at its development build, checks and messages included.
        resolve: { alias: [{ find: /^react-router$/, replacement: production('index.mjs') }, { find: /^react-router\/dom$/, replacement: production('dom-export.mjs') }] },
        worker: { format: 'es' as const },
        build: { outDir: '.build/client', emptyOutDir: true, manifest: true, chunkSizeWarningLimit: 4000 },
        test,
      },
)
