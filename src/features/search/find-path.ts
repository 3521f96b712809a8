import type { FindPlace } from '../../../shared/contract/search.ts'
import { paths } from '../../app/paths.ts'

/** The address that a find leads to. A draft is opened where it is edited, every other change where it is read. */
export function pathOf(at: FindPlace): string {
  switch (at.page) {
    case 'machine':
      return paths.machine(at.machine)
    case 'joint':
      return paths.joint(at.machine, at.joint)
    case 'family':
      return paths.family(at.machine, at.family)
    case 'bus':
      return paths.bus(at.machine, at.bus)
    case 'board':
      return paths.board(at.serial)
    case 'change':
      return at.draft ? paths.change(at.change) : paths.changeReview(at.change)
    case 'release':
      return paths.release(at.machine, at.version)
    case 'firmware':
      return paths.firmwareVersion(at.line, at.version)
    case 'ledger':
      return paths.ledgerEntry(at.entry)
    case 'person':
      return paths.person(at.person)
  }
}
