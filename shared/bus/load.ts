/** Time on the wire. Source: UM10204, nine clocks a byte (eight bits and the acknowledge); start, repeated start and stop a bit time each is common practice. */

/** Bits on the wire of one read of a board: start, address, register address, repeated start, address, data, stop. */
export const bitsPerRead = (bytes: number, addressBytes: number): number => 3 + 9 * (2 + addressBytes + bytes)

export interface LoadAsked {
  /** bit/s */
  bitRate: number
  /** reads of each board a second */
  pollingRate: number
  bytesPerTransaction: number
  /** of each board that is read: bytes of its register address */
  addressBytes: readonly number[]
}

/** Share of the bus that polling takes, 1 = all of it, and the bits of one round. */
export function busLoad({ bitRate, pollingRate, bytesPerTransaction, addressBytes }: LoadAsked): { share: number; bitsPerRound: number; secondsPerRound: number; fastestPolling: number } {
  const bitsPerRound = addressBytes.reduce((sum, a) => sum + bitsPerRead(bytesPerTransaction, a), 0)
  return { share: (bitsPerRound * pollingRate) / bitRate, bitsPerRound, secondsPerRound: bitsPerRound / bitRate, fastestPolling: bitsPerRound > 0 ? bitRate / bitsPerRound : Infinity }
}
