import type { FindKind } from '../../../shared/contract/search.ts'

export const kindWords: Record<FindKind, string> = {
  machine: 'Machines', joint: 'Joints', family: 'Families', bus: 'Buses', value: 'Values', register: 'Registers', board: 'Boards', change: 'Changes', release: 'Releases', firmware: 'Firmware', hash: 'Hashes', person: 'People',
}
