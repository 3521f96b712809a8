import { Link } from 'react-router'
import type { BusView, Tap } from '../../../../shared/contract/machines.ts'
import { paths } from '../../../app/paths.ts'
import { formatHex } from '../../../lib/format.ts'

const hatched = 'bg-[repeating-linear-gradient(135deg,var(--hairline)_0_1px,transparent_1px_5px)]'
const digits = Array.from({ length: 16 }, (_, i) => i)

/** The 128 addresses of a bus, sixteen a row: what answers where, what is free, what the bus keeps for itself. */
export function AddressGrid({ bus }: { bus: BusView }) {
  const at = (address: number) => bus.taps.filter((t) => t.address === address)
  const isReserved = (address: number) => bus.reserved.some((r) => r.from <= address && address <= r.to)
  return (
    <>
      <table className="w-full table-fixed border-collapse text-12" aria-label="addresses of the bus">
        <thead>
          <tr>
            <th scope="col" className="w-8 sm:w-12">
              <span className="sr-only">row</span>
            </th>
            {digits.map((d) => (
              <th key={d} scope="col" className="num py-1 font-normal text-ink-2">
                {d.toString(16).toUpperCase()}
              </th>
            ))}
          </tr>
        </thead>
        <tbody>
          {digits.slice(0, 8).map((row) => (
            <tr key={row}>
              <th scope="row" className="num pr-2 text-right font-normal text-ink-2">
                <span className="max-sm:sr-only">0x</span>
                {row.toString(16)}
                <span className="max-sm:sr-only">_</span>
              </th>
              {digits.map((d) => {
                const address = row * 16 + d
                return <Cell key={d} address={address} taps={at(address)} reserved={isReserved(address)} machine={bus.machine} />
              })}
            </tr>
          ))}
        </tbody>
      </table>
      <p className="mt-2 flex flex-wrap gap-x-5 gap-y-1 text-12 text-ink-2">
        <span className="inline-flex items-center gap-2"><i className="inline-block size-3 border border-hairline bg-verdigris-wash" /> joint</span>
        <span className="inline-flex items-center gap-2"><i className="inline-block size-3 border border-hairline bg-slate-wash" /> other device</span>
        <span className="inline-flex items-center gap-2"><i className="inline-block size-3 border border-oxide bg-oxide-wash" /> two at one address</span>
        <span className="inline-flex items-center gap-2"><i className={`${hatched} inline-block size-3 border border-hairline`} /> reserved by the bus</span>
        <span className="inline-flex items-center gap-2"><i className="inline-block size-3 border border-hairline" /> free, {bus.free}</span>
      </p>
    </>
  )
}

function Cell({ address, taps, reserved, machine }: { address: number; taps: readonly Tap[]; reserved: boolean; machine: string }) {
  const doubled = taps.length > 1
  const joint = taps.some((t) => t.joint !== null)
  const tint = doubled ? 'border-oxide bg-oxide-wash' : taps.length === 0 ? 'border-hairline' : joint ? 'border-hairline bg-verdigris-wash' : 'border-hairline bg-slate-wash'
  return (
    <td className={`h-9 border p-0 align-middle ${tint} ${reserved ? hatched : ''}`} title={`${formatHex(address)} ${taps.map((t) => t.name).join(' and ') || (reserved ? 'reserved' : 'free')}`}>
      {taps.length === 0 && reserved && <span className="sr-only">reserved</span>}
      {taps.map((tap) => {
        const inside = (
          <>
            <span className="block truncate px-1 text-center leading-4 max-sm:sr-only">{tap.name}</span>
            <i className="mx-auto my-[3px] block size-[9px] bg-ink sm:hidden" />
          </>
        )
        return tap.joint === null ? (
          <span key={tap.name}>{inside}</span>
        ) : (
          <Link key={tap.joint} to={paths.joint(machine, tap.joint)} aria-label={`${tap.name}, ${formatHex(address)}${doubled ? ', shares its address' : ''}`} className="block font-medium text-ink no-underline hover:underline">
            {inside}
          </Link>
        )
      })}
    </td>
  )
}
