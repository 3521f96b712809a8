import type { EntityManager } from '@mikro-orm/core'
import { proveDiffers, proveEqual, type Board } from './board.entity.ts'
import type { ComparedDump } from './compare-dump.ts'
import { tell, type Speaker } from './speaker.ts'

/**
 * Takes a compared dump as what the board holds: equal to the release, equal to another one, or to none.
 *
 * Bytes that equal another release say that the board holds that one, whatever was recorded.
 *
 * @throws DomainError wrong-state for a retired board
 */
export async function takeReadBack(em: EntityManager, board: Board, compared: ComparedDump, speaker: Speaker): Promise<void> {
  const { result, release, joint, bytes } = compared
  const saying = { by: speaker.person.name, at: speaker.now }
  const told = { sha256: result.sha256, verdict: result.verdict, comparedWith: result.release, registersThatDiffer: result.differences.length }
  const place = board.joint ?? joint
  if (compared.equal) {
    const { equal } = compared
    const note = equal.release.id === release.id ? '' : `holds ${equal.release.version}, not ${release.version}`
    proveEqual(board, { release: equal.release, imageOf: joint, firmware: equal.firmware }, saying)
    await tell(em, board, speaker, { kind: 'read-back verified', joint: place, release: equal.release, note, readBack: equal.result, dump: bytes, details: told })
    return
  }
  proveDiffers(board, saying)
  await tell(em, board, speaker, { kind: 'read-back differs', joint: place, release, readBack: result, dump: bytes, details: { ...told, registers: result.differences.map((d) => d.address) } })
}
