/** A short explanation of one thing that a screen shows. */
export interface HelpTopic {
  title: string
  /** one to three sentences: what it is, what it does, what to look at */
  text: string
  /** with the letters of the joint model */
  formula?: string
  /** where formula or limit come from; what was recalled and not read says so */
  source: string
}

/** Topics are named by kind: "role:velocity.kp", "finding:phase margin", "figure:bandwidth". */
export type HelpKind = 'role' | 'finding' | 'figure'

export const model = (part: string) => `Detent’s joint model, ${part} (server/control/MODEL.md)`
