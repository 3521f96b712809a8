// `npm test`: everything, in one command. Installs the outside tools it checks against where it may, says how where it may not, and never skips.
import { execFileSync, spawnSync } from 'node:child_process'
import { existsSync, mkdirSync, readFileSync } from 'node:fs'
import { fileURLToPath } from 'node:url'

const root = fileURLToPath(new URL('..', import.meta.url))
process.chdir(root)

const tools = [
  { package: 'chromium', there: () => ['/usr/bin/chromium', process.env.DETENT_CHROMIUM].some((p) => p && existsSync(p)) },
  { package: 'srecord', there: () => spawnSync('srec_cat', ['--version']).error === undefined },
  { package: 'python3-intelhex', there: () => spawnSync('/usr/bin/python3', ['-c', 'import intelhex']).status === 0 },
  { package: 'curl', there: () => spawnSync('curl', ['--version']).error === undefined },
  { package: 'openssl', there: () => spawnSync('openssl', ['version']).error === undefined },
]

function install() {
  const missing = tools.filter((t) => !t.there()).map((t) => t.package)
  if (missing.length === 0) return
  const how = `apt-get install --no-install-recommends ${missing.join(' ')}`
  if (process.getuid?.() !== 0 || !existsSync('/usr/bin/apt-get')) {
    console.error(`The tests check against ${missing.join(', ')}, which ${missing.length === 1 ? 'is' : 'are'} not on this machine. Install first: sudo ${how}`)
    process.exit(1)
  }
  console.log(`Installing ${missing.join(', ')} …`)
  const env = { ...process.env, DEBIAN_FRONTEND: 'noninteractive' }
  execFileSync('apt-get', ['update', '-q'], { stdio: 'ignore', env })
  execFileSync('apt-get', ['install', '-y', '-q', '--no-install-recommends', ...missing], { stdio: ['ignore', 'ignore', 'inherit'], env })
  const still = tools.filter((t) => !t.there()).map((t) => t.package)
  if (still.length > 0) throw new Error(`${still.join(', ')} could not be installed; try: ${how}`)
}

/** A step that is one check of its own: passes or fails as a whole. */
function step(name, command, args) {
  console.log(`\n— ${name}`)
  const { status } = spawnSync(command, args, { stdio: 'inherit' })
  if (status !== 0) failed.push(name)
  else passed += 1
}

const failed = []
let passed = 0
install()
step('types', process.execPath, ['node_modules/ts7/bin/tsc', '-p', 'tsconfig.json'])
step('lint', process.execPath, ['node_modules/eslint/bin/eslint.js', '.'])
step('import directions', process.execPath, ['node_modules/dependency-cruiser/bin/dependency-cruise.mjs', '--config', '.dependency-cruiser.cjs', '--output-type', 'err', 'src', 'server', 'shared'])
step('build', process.execPath, ['server/launch.mjs', '--build-only'])

console.log('\n— tests')
mkdirSync('.build', { recursive: true })
const report = '.build/test-report.json'
const { status } = spawnSync(process.execPath, ['node_modules/vitest/vitest.mjs', 'run', '--reporter=default', '--reporter=json', `--outputFile.json=${report}`, ...process.argv.slice(2)], { stdio: 'inherit', env: { ...process.env, FORCE_COLOR: '0' } })
const { numPassedTests, numFailedTests, numFailedTestSuites, numTotalTests, testResults } = JSON.parse(readFileSync(report, 'utf8'))
for (const file of testResults.filter((r) => r.status === 'failed')) console.log(`failed: ${file.name.slice(root.length)}`)
const notRun = numTotalTests - numPassedTests - numFailedTests
if (notRun > 0) console.log(`${notRun} tests were skipped; every test must run.`)
const failures = numFailedTests + failed.length + (notRun > 0 ? 1 : 0) + (numFailedTests === 0 && (status !== 0 || numFailedTestSuites > 0) ? 1 : 0)
for (const name of failed) console.log(`failed: ${name}`)
console.log(`\n${numPassedTests + passed} passed, ${failures} failed`)
process.exit(failures === 0 ? 0 : 1)
