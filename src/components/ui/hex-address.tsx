import { formatHex } from '../../lib/format.ts'

/** A bus or register address, 0x33. */
export function HexAddress({ address, className = '' }: { address: number; className?: string }) {
  return <span className={`num ${className}`}>{formatHex(address)}</span>
}
