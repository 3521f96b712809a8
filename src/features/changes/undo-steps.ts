import { inverse, type Edit } from '../../../shared/parameters/edits.ts'
import { folded } from './edit-batches.ts'

/** Two edits of one place within this time are one step: a held arrow key, a dragged ball. */
const ONE_STEP = 1000

/** The way back and forth over a person's own edits. */
export class UndoSteps {
  private done: Edit[][] = []
  private undone: Edit[][] = []
  private lastAt = 0

  get canUndo() {
    return this.done.length > 0
  }
  get canRedo() {
    return this.undone.length > 0
  }

  /** @param now  ms; steps that follow one another closely at one place are folded */
  add(edits: readonly Edit[], now: number) {
    const last = this.done.at(-1)
    const sameStep = last && now - this.lastAt < ONE_STEP && last.length === edits.length && last.every((e, i) => e.pointer === edits[i].pointer)
    if (sameStep) this.done[this.done.length - 1] = folded(last, edits)
    else this.done.push([...edits])
    if (this.done.at(-1)?.length === 0) this.done.pop()
    this.undone = []
    this.lastAt = now
  }

  /** The next edit is a step of its own, however soon it comes. */
  close() {
    this.lastAt = 0
  }

  /** Forgets the last step, which never took effect. */
  drop() {
    this.done.pop()
  }

  /** The edits that take the last step back; none when there is none. */
  back(): Edit[] {
    const step = this.done.pop()
    if (!step) return []
    this.undone.push(step)
    this.close()
    return inverse(step)
  }

  forth(): Edit[] {
    const step = this.undone.pop()
    if (!step) return []
    this.done.push(step)
    this.close()
    return step
  }
}
