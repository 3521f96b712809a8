// Fifty people reading and editing on a large database: npx tsx tests/load/load.ts [SECONDS]; writes its figures into tests/RELIABILITY.md.
import { loadavg } from 'node:os'
import autocannon from 'autocannon'
import { dunlin } from '../../server/demo/dunlin.ts'
import { Child } from '../reliability/a-child.ts'
import { aBench } from '../reliability/a-bench.ts'
import { must } from '../reliability/a-client.ts'
import { seeded } from '../reliability/kill-points.ts'
import { writeFigures } from '../reliability/report.ts'
import { fill, size } from './fill.ts'
import { beginFrom, percentile, work, type Sample } from './people.ts'

const seconds = Number(process.argv[2] ?? 60)
const secret = 'a secret for tests alone'
const saves = new Set(['draft a change', 'save a value'])

const ms = (value: number) => value.toFixed(1)
const row = (what: string, times: readonly number[]) => {
  const sorted = [...times].sort((a, b) => a - b)
  return `| ${what} | ${sorted.length} | ${ms(percentile(sorted, 50))} | ${ms(percentile(sorted, 95))} | ${ms(percentile(sorted, 99))} | ${ms(sorted.at(-1) ?? NaN)} |`
}

/** Fifty connections that ask one address as fast as it answers, for some seconds. */
async function atFull(url: string, headers: Record<string, string> = {}) {
  const { latency, requests, non2xx, errors } = await autocannon({ url, connections: 50, duration: 5, headers })
  if (non2xx > 0 || errors > 0) throw new Error(`${url}: ${non2xx} refused, ${errors} failed`)
  return { median: latency.p50, p99: latency.p99, perSecond: requests.average }
}

async function main(): Promise<number> {
  const bench = await aBench('load')
  const child = new Child(bench.file('child'), ['--expose-gc'])
  try {
    const { folder } = bench.prepared
    must(await bench.prepared.act('release', await child.open(folder)), 201)
    await child.close()
    const seats = await fill(folder, secret, new Date())
    const port = await child.open(folder)
    beginFrom(dunlin.families.knee.values.velocityGain)
    const bare = await atFull(`http://127.0.0.1:${await child.ask<number>({ do: 'bare' })}/250`)
    const own = await atFull(`http://127.0.0.1:${port}/api/me`, { Cookie: seats[0].cookie })
    const samples: Sample[] = []
    const memory: number[] = []
    const until = performance.now() + seconds * 1000
    const watch = setInterval(() => void child.ask<number>({ do: 'memory' }).then((rss) => memory.push(rss), () => {}), 5000)
    const load = loadavg()[0]
    await Promise.all(seats.map((seat, i) => work({ port, seat, joints: ['l1-knee', 'r1-knee'], random: seeded(i + 1), until, take: (s) => samples.push(s) })))
    clearInterval(watch)
    const failures = samples.filter((s) => s.status >= 400)
    const reads = samples.filter((s) => !saves.has(s.what))
    const kinds = [...new Set(samples.map((s) => s.what))].sort()
    const timesOf = (list: readonly Sample[]) => list.map((s) => s.ms)
    const halves = [memory.slice(Math.floor(memory.length / 4), Math.floor(memory.length / 2)), memory.slice(Math.floor((memory.length * 3) / 4))].map((part) => part.reduce((a, b) => a + b, 0) / Math.max(1, part.length) / 2 ** 20)
    writeFigures(
      'load',
      [
        `${size.people} people, ${seconds} s, ${samples.length} requests (${(samples.length / seconds).toFixed(0)} a second), ${failures.length} refused or failed; ${size.revisions} revisions, ${size.releases} releases, ${size.entries} ledger entries, ${size.boards} boards. Load of the machine when it began: ${load.toFixed(1)} on its processors.`,
        '',
        '| request | number | p50 ms | p95 ms | p99 ms | longest ms |',
        '| --- | ---: | ---: | ---: | ---: | ---: |',
        row('all reads', timesOf(reads)),
        row('all saves', timesOf(samples.filter((s) => saves.has(s.what)))),
        ...kinds.map((what) => row(what, timesOf(samples.filter((s) => s.what === what)))),
        '',
        `Asked as fast as it answers, by fifty connections (autocannon): a bare Express point read of the same database ${bare.perSecond.toFixed(0)} a second, p99 ${bare.p99} ms; Detent's own shortest read, who is signed in, session and rights and all, ${own.perSecond.toFixed(0)} a second, p99 ${own.p99} ms: ${(bare.perSecond / own.perSecond).toFixed(1)} times the work.`,
        `Memory of the process: ${halves[0].toFixed(0)} MiB on average in the second quarter of the run, ${halves[1].toFixed(0)} MiB in the last.`,
        ...[...new Set(failures.map((f) => `${f.what}: ${f.status}`))].map((f) => `\nRefused or failed: ${f}`),
      ].join('\n'),
      new Date(),
    )
    process.stdout.write(`${samples.length} requests, ${failures.length} refused or failed; the figures stand in tests/RELIABILITY.md\n`)
    return failures.length === 0 ? 0 : 1
  } finally {
    await child.end()
    bench.clear()
  }
}

main().then(
  (code) => process.exit(code),
  (error: Error) => {
    process.stderr.write(`${error.stack}\n`)
    process.exit(1)
  },
)
