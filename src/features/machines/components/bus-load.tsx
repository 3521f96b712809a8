import { busLoad } from '../../../../shared/bus/load.ts'
import type { BusView } from '../../../../shared/contract/machines.ts'
import type { BusSettings } from '../../../../shared/parameters/machine-set.ts'
import { KeyValueList } from '../../../components/ui/key-value-list.tsx'
import { Num } from '../../../components/ui/num.tsx'
import { count, formatNumber } from '../../../lib/format.ts'

/** How much of the bus polling takes, in bit times; `boards` more than there are, for a what-if. */
export function BusLoad({ bus, settings, more = 0 }: { bus: BusView; settings: BusSettings; more?: number }) {
  const { pollingRate, bytesPerTransaction, bitRate } = settings
  if (pollingRate === undefined || bytesPerTransaction === undefined) return <p className="py-2 text-13 text-ink-2">The bus says neither how often its boards are read nor how many bytes; a change can say it.</p>
  const own = Object.values(bus.addressBytes)
  const addressBytes = [...own, ...Array.from({ length: more }, () => own[0] ?? 1)]
  const { share, bitsPerRound, secondsPerRound, fastestPolling } = busLoad({ bitRate, pollingRate, bytesPerTransaction, addressBytes })
  const percent = 100 * share
  const { advise, block } = bus.loadPercent
  const word = percent > block ? 'more than the bus carries' : percent > advise ? 'high' : 'holds'
  const tone = percent > block ? 'text-oxide' : percent > advise ? 'text-plum' : 'text-verdigris'
  return (
    <div className="grid gap-2 py-2">
      <div className="flex flex-wrap items-baseline gap-x-3">
        <span className="num text-20">{formatNumber(percent)} %</span>
        <span className={`text-13 ${tone}`}>{word}</span>
      </div>
      <Scale percent={percent} advise={advise} block={block} />
      <KeyValueList
        entries={[
          { key: 'one round', value: <>{count(addressBytes.length, 'board')}, <Num value={String(bitsPerRound)} /> bit times, <Num value={secondsPerRound} unit="s" digits={3} /></> },
          { key: 'fastest polling', value: <><Num value={fastestPolling} unit="Hz" digits={3} /> takes all of it</> },
          { key: 'counted', value: 'start, repeated start, stop; address twice, register address and data, nine clocks a byte with its ACK' },
        ]}
      />
    </div>
  )
}

function Scale({ percent, advise, block }: { percent: number; advise: number; block: number }) {
  const end = Math.max(100, block, percent) * 1.05
  const x = (p: number) => `${(100 * Math.min(p, end)) / end}%`
  return (
    <svg className="h-4 w-full max-w-[420px]" role="img" aria-label={`${formatNumber(percent)} % of the bus; advised up to ${advise} %, blocked above ${block} %`}>
      <line x1="0" x2="100%" y1="8" y2="8" stroke="var(--rule)" />
      <line x1="0" x2={x(percent)} y1="8" y2="8" stroke="var(--ink)" strokeWidth="2" />
      {[advise, block].map((p) => <line key={p} x1={x(p)} x2={x(p)} y1="2" y2="14" stroke="var(--plum)" strokeWidth="1.5" />)}
      <circle cx={x(percent)} cy="8" r="5" fill="var(--brass)" />
    </svg>
  )
}
