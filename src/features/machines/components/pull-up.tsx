import { pullUpWindow } from '../../../../shared/bus/pull-up.ts'
import type { BusSettings } from '../../../../shared/parameters/machine-set.ts'
import { KeyValueList } from '../../../components/ui/key-value-list.tsx'
import { Num } from '../../../components/ui/num.tsx'

/** Which resistors the bus can have, and whether its own is one of them. */
export function PullUp({ settings }: { settings: BusSettings }) {
  const window = pullUpWindow(settings)
  if (!window) return <p className="py-2 text-13 text-ink-2">Above 1 Mbit/s the lines are driven otherwise; there is no window to give.</p>
  const { low, high, mode, mostCapacitance, capacitanceForLow } = window
  const none = low > high
  const inside = settings.pullUp >= low && settings.pullUp <= high
  return (
    <div className="grid gap-2 py-2">
      <div className="flex flex-wrap items-baseline gap-x-3">
        {none ? (
          <span className="text-16 font-medium text-oxide">No valid resistor</span>
        ) : (
          <>
            <span className="text-16"><Num value={low} unit="Ω" digits={3} /> to <Num value={high} unit="Ω" digits={3} /></span>
            <span className={`text-13 ${inside ? 'text-verdigris' : 'text-plum'}`}>
              <Num value={settings.pullUp} unit="Ω" digits={3} /> {inside ? 'is inside' : settings.pullUp < low ? 'is too small: drivers can’t pull the line low' : 'is too large: the line rises too slowly'}
            </span>
          </>
        )}
      </div>
      {none && (
        <p className="text-13">
          Drivers need at least <Num value={low} unit="Ω" digits={3} />, the rise time allows at most <Num value={high} unit="Ω" digits={3} />. Less than <Num value={capacitanceForLow} unit="F" digits={3} /> a line, a lower bit rate, or a buffer between parts of the bus opens the window.
        </p>
      )}
      <KeyValueList
        entries={[
          { key: 'mode', value: mode },
          { key: 'capacitance', value: <><Num value={settings.capacitance} unit="F" digits={3} />{settings.capacitance > mostCapacitance && <span className="text-plum">, more than the <Num value={mostCapacitance} unit="F" /> that {mode} allows a line</span>}</> },
          { key: 'from', value: <>(V<sub>DD</sub> − V<sub>OL</sub>)/I<sub>OL</sub> and t<sub>r</sub>/(0.8473·C<sub>b</sub>), UM10204 §7.1</> },
        ]}
      />
    </div>
  )
}
