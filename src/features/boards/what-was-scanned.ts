import type { MachineBoards } from '../../../shared/contract/boards.ts'

export type Scanned =
  /** the joint is known, and perhaps the board in hand */
  | { kind: 'joint'; joint: string; serial: string | null }
  /** a board whose joint has to be picked */
  | { kind: 'board'; serial: string; words: string }
  | { kind: 'nothing'; words: string }

const serialForm = /^[A-Za-z0-9][A-Za-z0-9._-]{0,39}$/

/** What a scanner or a person typed: a joint by its name, a board by its serial number, or a board that is new here. */
export function whatWasScanned(typed: string, boards: MachineBoards): Scanned {
  const text = typed.trim()
  const same = (other: string | null | undefined) => other != null && other.toLowerCase() === text.toLowerCase()
  const joint = boards.joints.find((j) => same(j.name) || same(j.joint))
  if (joint) return { kind: 'joint', joint: joint.joint, serial: null }
  const seated = boards.joints.find((j) => same(j.board?.serial))
  if (seated) return { kind: 'joint', joint: seated.joint, serial: seated.board!.serial }
  const measured = boards.joints.find((j) => same(j.calibratedFor))
  if (measured) return { kind: 'joint', joint: measured.joint, serial: measured.calibratedFor! }
  const off = boards.off.find((b) => same(b.serial))
  if (off) return { kind: 'board', serial: off.serial, words: `${off.serial} sits at no joint; pick the one it goes to.` }
  if (serialForm.test(text)) return { kind: 'board', serial: text, words: `${text} is new on ${boards.machineName}; pick the joint it goes to.` }
  return { kind: 'nothing', words: `"${text}" is no joint of ${boards.machineName} and no serial number.` }
}
