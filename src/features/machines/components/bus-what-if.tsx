import { useState } from 'react'
import { ADDRESSES, keptFor, reserved } from '../../../../shared/bus/addresses.ts'
import type { BusView } from '../../../../shared/contract/machines.ts'
import { Button } from '../../../components/ui/button.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { formatHex, parseNumber } from '../../../lib/format.ts'
import { BusLoad } from './bus-load.tsx'
import { PullUp } from './pull-up.tsx'

/** What can be tried, with the factor of the unit it is typed in. */
const tried = [
  { key: 'bitRate', label: 'bit rate', unit: 'kbit/s', per: 1e3, least: 1 },
  { key: 'supply', label: 'supply', unit: 'V', per: 1, least: 0.5 },
  { key: 'pullUp', label: 'pull-up', unit: 'Ω', per: 1, least: 1 },
  { key: 'capacitance', label: 'capacitance', unit: 'pF', per: 1e-12, least: 1 },
  { key: 'pollingRate', label: 'reads a second', unit: 'Hz', per: 1, least: 0 },
  { key: 'bytesPerTransaction', label: 'bytes a read', unit: 'B', per: 1, least: 1 },
] as const
type Key = (typeof tried)[number]['key']

const shownOf = (bus: BusView, key: Key, per: number) => (bus.settings[key] === undefined ? '' : String(Number((bus.settings[key] / per).toPrecision(6))))

/** Load, pull-up and addresses with other figures: nothing is drafted by trying. */
export function BusWhatIf({ bus }: { bus: BusView }) {
  const asReleased = () => Object.fromEntries(tried.map((t) => [t.key, shownOf(bus, t.key, t.per)])) as Record<Key, string>
  const [typed, setTyped] = useState(asReleased)
  const [more, setMore] = useState('0')
  const [address, setAddress] = useState('')
  const read = tried.map((t) => {
    const text = typed[t.key].trim()
    if (text === '' && (t.key === 'pollingRate' || t.key === 'bytesPerTransaction')) return { ...t, value: undefined, problem: null }
    const number = parseNumber(text)
    if (number.kind === 'error') return { ...t, value: undefined, problem: number.message }
    return { ...t, value: number.value * t.per, problem: number.value < t.least ? `at least ${t.least}` : null }
  })
  const extra = parseNumber(more)
  const moreProblem = extra.kind === 'error' ? extra.message : !Number.isInteger(extra.value) || extra.value < 0 || extra.value > 112 ? 'a whole number up to 112' : null
  const fits = read.every((r) => r.problem === null) && moreProblem === null
  const settings = { ...bus.settings, ...Object.fromEntries(read.map((r) => [r.key, r.value])) }
  const altered = tried.some((t) => typed[t.key] !== shownOf(bus, t.key, t.per)) || more !== '0' || address !== ''
  return (
    <section aria-labelledby="what-if" className="mb-8">
      <SectionHeading
        id="what-if"
        aux="tried here alone; nothing is drafted"
        actions={altered ? <Button kind="link" onClick={() => { setTyped(asReleased()); setMore('0'); setAddress('') }}>as released</Button> : undefined}
      >
        What if
      </SectionHeading>
      <div className="mt-2 grid grid-cols-2 gap-x-4 gap-y-2 sm:grid-cols-4">
        {read.map((r) => (
          <TextField key={r.key} label={r.label} unit={r.unit} mono inputMode="decimal" value={typed[r.key]} onChange={(text) => setTyped((before) => ({ ...before, [r.key]: text }))} error={r.problem} />
        ))}
        <TextField label="more boards" mono inputMode="numeric" value={more} onChange={setMore} error={moreProblem} />
        <TextField label="an address" mono value={address} placeholder="0x2A" onChange={setAddress} />
      </div>
      <p role="status" className="min-h-6 pt-1 text-13">{address.trim() !== '' && addressWords(bus, address)}</p>
      {fits && !altered ? (
        <p className="text-13 text-ink-2">Alter a figure, and load and pull-up are worked out with it beside those as released; write an address, and what stands there is told.</p>
      ) : fits ? (
        <div className="grid gap-x-10 sm:grid-cols-2">
          <div>
            <SectionHeading level={3}>Load, tried</SectionHeading>
            <BusLoad bus={bus} settings={settings} more={extra.kind === 'number' ? extra.value : 0} />
          </div>
          <div>
            <SectionHeading level={3}>Pull-up, tried</SectionHeading>
            <PullUp settings={settings} />
          </div>
        </div>
      ) : (
        <p className="py-2 text-13 text-ink-2">Mend what is marked, and the figures come back.</p>
      )}
    </section>
  )
}

/** What stands at an address, in the release and in open changes. */
function addressWords(bus: BusView, typed: string): string {
  const text = typed.trim()
  const value = /^0x[0-9a-f]+$/i.test(text) || /^\d+$/.test(text) ? Number(text) : NaN
  if (!ADDRESSES.includes(value)) return `“${text}” is no address of seven bits: 0x00 to 0x7F.`
  const there = [...bus.taps.filter((t) => t.address === value).map((t) => t.name), ...bus.claims.filter((c) => c.address === value).map((c) => `${c.name} in ${c.change}`)]
  if (there.length > 0) return `${formatHex(value)} is taken by ${there.join(' and ')}: two at one address silence the bus.`
  if (reserved(value)) return `${formatHex(value)} is kept for ${keptFor(value)}. It takes a concession that says why nothing on this bus uses it so.`
  return `${formatHex(value)} is free.`
}
