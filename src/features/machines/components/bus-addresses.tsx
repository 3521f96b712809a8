import { proposeAddresses } from '../../../../shared/bus/addresses.ts'
import type { BusView } from '../../../../shared/contract/machines.ts'
import { paths } from '../../../app/paths.ts'
import { ErrorPanel } from '../../../components/ui/error-panel.tsx'
import { HexAddress } from '../../../components/ui/hex-address.tsx'
import { TextLink } from '../../../components/ui/text-link.tsx'

/** What open changes do to the addresses, what they would double, and which are free to take. */
export function BusAddresses({ bus }: { bus: BusView }) {
  const taken = [...bus.taps.map((t) => t.address), ...bus.claims.map((c) => c.address)]
  const proposed = proposeAddresses(taken, 6)
  return (
    <div className="mt-3 grid gap-3">
      {bus.contested.map((c) => (
        <ErrorPanel
          key={c.address}
          title={`0x${c.address.toString(16).toUpperCase().padStart(2, '0')} would be doubled`}
          happened={
            <>
              {c.claims.map((claim, i) => (
                <span key={`${claim.change} ${claim.joint}`}>
                  {i > 0 && ', '}
                  <TextLink className="num" to={paths.change(claim.change)}>{claim.change}</TextLink> puts {claim.name} there
                </span>
              ))}
              {c.holder && <>, where {c.holder} is</>}.
            </>
          }
          whatToDo="Give one of them another address before both are released."
        />
      ))}
      {bus.claims.length > 0 && (
        <p className="text-13">
          In open changes:{' '}
          {bus.claims.map((c, i) => (
            <span key={`${c.change} ${c.joint}`}>
              {i > 0 && '; '}
              {c.name} at <HexAddress address={c.address} /> in <TextLink className="num" to={paths.change(c.change)}>{c.change}</TextLink> ({c.state})
            </span>
          ))}
        </p>
      )}
      <p className="text-13">
        {proposed.length === 0 ? (
          'No address is free on this bus.'
        ) : (
          <>
            Free to take:{' '}
            {proposed.map((a, i) => (
              <span key={a}>
                {i > 0 && ' '}
                <HexAddress address={a} />
              </span>
            ))}
            <span className="text-ink-2">, each two bits or more from every taken one where there is such; open changes counted in</span>
          </>
        )}
      </p>
    </div>
  )
}
