// Writes server/DEPENDENCIES.md from the lock file: npx tsx tests/dependency-list.ts
import { readdirSync, readFileSync, writeFileSync } from 'node:fs'
import { pathToFileURL } from 'node:url'

interface Locked {
  version: string
  license?: string
  dev?: boolean
  devOptional?: boolean
  optional?: boolean
}

const root = new URL('../', import.meta.url)
export const listFile = new URL('server/DEPENDENCIES.md', root)
const json = (path: string): unknown => JSON.parse(readFileSync(new URL(path, root), 'utf8'))

export interface Dependency {
  name: string
  version: string
  licence: string
  /** needed by the tests and the build of the tests alone */
  dev: boolean
  /** left out where the platform is another */
  optional: boolean
}

/** Older packages name their licence in their own package file alone, or only in words. */
function licenceOf(path: string, locked: Locked): string {
  if (locked.license) return locked.license
  const { license, licenses } = json(`${path}/package.json`) as { license?: string; licenses?: { type: string }[] }
  if (license) return license
  if (licenses) return licenses.map((l) => l.type).join(' OR ')
  const readme = readdirSync(new URL(path, root)).find((name) => /^readme/i.test(name))
  return readme && /\(the mit license\)/i.test(readFileSync(new URL(`${path}/${readme}`, root), 'utf8')) ? 'MIT' : 'none named'
}

/** Every package of the lock file, once by name and version. */
export function dependencies(): Dependency[] {
  const { packages } = json('package-lock.json') as { packages: Record<string, Locked> }
  const all = Object.entries(packages).flatMap(([path, p]) => (path === '' ? [] : [{ name: path.slice(path.lastIndexOf('node_modules/') + 'node_modules/'.length), version: p.version, licence: licenceOf(path, p), dev: Boolean(p.dev), optional: Boolean(p.optional || p.devOptional) }]))
  const key = (d: Dependency) => `${d.name} ${d.version}`
  return [...new Map(all.sort((a, b) => Number(b.dev) - Number(a.dev)).map((d) => [key(d), d])).values()].sort((a, b) => (key(a) < key(b) ? -1 : 1))
}

const byLicence = (list: readonly Dependency[]) => {
  const licences = [...new Set(list.map((d) => d.licence))].sort((a, b) => (a < b ? -1 : 1))
  return licences.map((licence) => {
    const under = list.filter((d) => d.licence === licence)
    return `**${licence}** (${under.length}): ${under.map((d) => `${d.name} ${d.version}${d.optional ? '°' : ''}`).join(', ')}`
  })
}

/** The list as it stands in the repository. */
export function dependencyList(): string {
  const { dependencies: run, devDependencies: dev } = json('package.json') as Record<'dependencies' | 'devDependencies', Record<string, string>>
  const all = dependencies()
  const direct = (names: string[]) => names.map((name) => `| ${name} | ${(run[name] ?? dev[name])} | ${all.find((d) => d.name === name)?.licence ?? ''} |`)
  return `${[
    '# What Detent is built of',
    '',
    'Written by `npx tsx tests/dependency-list.ts` from the lock file; a test holds it to be up to date, and every licence to the list of those that are taken. ° is left out where the platform is another.',
    '',
    '## Named in package.json, run by the program',
    '',
    '| package | version | licence |',
    '| --- | --- | --- |',
    ...direct(Object.keys(run)),
    '',
    '## Named in package.json, run by the tests alone',
    '',
    '| package | version | licence |',
    '| --- | --- | --- |',
    ...direct(Object.keys(dev)),
    '',
    `## Everything the program runs on (${all.filter((d) => !d.dev).length})`,
    '',
    byLicence(all.filter((d) => !d.dev)).join('\n\n'),
    '',
    `## Everything the tests add (${all.filter((d) => d.dev).length})`,
    '',
    byLicence(all.filter((d) => d.dev)).join('\n\n'),
  ].join('\n')}\n`
}

if (process.argv[1] && import.meta.url === pathToFileURL(process.argv[1]).href) writeFileSync(listFile, dependencyList())
