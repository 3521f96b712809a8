import type { ChangeView } from '../../../shared/contract/changes.ts'
import { editsBetween, type Edit } from '../../../shared/parameters/edits.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import { editText, readText, type TextProblem } from '../../../shared/parameters/set-text.ts'
import { ApiProblem } from '../../lib/api-client.ts'
import type { DraftStorage } from './draft-storage.ts'
import { decided, enqueue, type Batch, type Keep, type ValueConflict } from './edit-batches.ts'
import { laidOnto } from './laid-onto.ts'
import { textOnto } from './text-onto.ts'
import { UndoSteps } from './undo-steps.ts'

/**
 * saved: nothing waits; waiting: soon sent; sending; lost: no answer, tried again by itself; unread: the typed text has lines to correct;
 * halted: a conflict or a refusal waits for the person.
 */
export type Saving = 'saved' | 'waiting' | 'sending' | 'lost' | 'unread' | 'halted'

export interface DraftState {
  /** as the server last answered */
  view: ChangeView
  /** values as they stand for this person: saved ones with those not sent yet */
  set: MachineSet
  /** edits of the set that the server has not taken yet */
  pending: readonly Edit[]
  text: string
  saving: Saving
  savedAt: number | null
  conflicts: readonly ValueConflict[]
  textProblems: readonly TextProblem[]
  refusal: ApiProblem | null
  canUndo: boolean
  canRedo: boolean
}

/** The way to the server. */
export interface Sender {
  values(edits: readonly Edit[]): Promise<ChangeView>
  text(text: string, ifMatch: number): Promise<ChangeView>
  fresh(): Promise<ChangeView>
}

const VALUES_PAUSE = 150
const TEXT_PAUSE = 800
const KEEP_PAUSE = 250
const RETRIES = [1000, 2000, 4000, 8000, 15_000]

const isLost = (e: unknown) => e instanceof ApiProblem && (e.status === 0 || e.status >= 500 || e.status === 429 || e.code === 'not-signed-in')

const unexpected = (error: unknown) =>
  new ApiProblem({ code: 'unexpected', status: 0, title: 'Saving failed', detail: `Saving failed in this page: ${error instanceof Error ? error.message : String(error)}. What you typed is kept in this browser; load the page again.` })

/**
 * Holds a draft while it is edited: sends edits in order, repeats them after a dropped connection, keeps what is unsaved in the browser,
 * and remembers the way back.
 */
export class DraftKeeper {
  private view: ChangeView
  private queue: Batch[] = []
  private typed: { text: string; basis: string } | null = null
  private saving: Saving = 'saved'
  private savedAt: number | null = null
  private conflicts: ValueConflict[] = []
  /** where the open conflicts came from, and what was decided of a text's */
  private conflictOf: 'values' | 'text' = 'values'
  private decisions = new Map<string, Keep>()
  private textProblems: TextProblem[] = []
  private refusal: ApiProblem | null = null
  private readonly steps = new UndoSteps()
  private textDue = false
  private attempts = 0
  private busy: Promise<void> | null = null
  private timers = new Map<'send' | 'text' | 'keep' | 'retry', ReturnType<typeof setTimeout>>()
  private listeners = new Set<() => void>()
  private state: DraftState
  private readonly sender: Sender
  private readonly storage: DraftStorage
  private readonly onView: (view: ChangeView) => void

  constructor({ view, sender, storage, onView }: { view: ChangeView; sender: Sender; storage: DraftStorage; onView: (view: ChangeView) => void }) {
    this.view = view
    this.sender = sender
    this.storage = storage
    this.onView = onView
    const kept = storage.read()
    if (kept) {
      this.queue = kept.queue
      this.typed = kept.typed
      if (this.queue.length > 0 || this.typed) this.saving = 'waiting'
    }
    this.state = this.snapshot()
  }

  subscribe = (listener: () => void) => {
    this.listeners.add(listener)
    return () => void this.listeners.delete(listener)
  }
  getState = (): DraftState => this.state

  /** Begins to send; also what an earlier page left unsent. Returns the way to stop. */
  start(): () => void {
    const again = () => this.retry()
    window.addEventListener('online', again)
    if (this.queue.length > 0 || this.typed) {
      this.textDue = true
      this.after('send', 0, () => this.pump())
    }
    return () => {
      window.removeEventListener('online', again)
      for (const timer of this.timers.values()) clearTimeout(timer)
      this.timers.clear()
      this.keep()
    }
  }

  /** A newer answer of the server, from wherever it was read. */
  accept(view: ChangeView) {
    if (view.revision < this.view.revision || view === this.view) return
    this.view = view
    this.changed()
  }

  edit(edits: readonly Edit[]) {
    if (edits.length === 0) return
    this.steps.add(edits, Date.now())
    this.put(edits)
  }

  undo() {
    this.put(this.steps.back())
  }

  redo() {
    this.put(this.steps.forth())
  }

  /** The text as it is typed; saved after a pause, as soon as it can be read. */
  type(text: string) {
    this.typed = text === this.savedText() ? null : { text, basis: this.typed?.basis ?? this.view.text }
    this.textProblems = []
    this.textDue = false
    if (this.saving === 'saved' || this.saving === 'unread') this.saving = this.typed ? 'waiting' : 'saved'
    this.after('text', TEXT_PAUSE, () => {
      this.textDue = true
      void this.pump()
    })
    this.after('keep', KEEP_PAUSE, () => this.keep())
    this.changed()
  }

  /** Lets go of the typed text: the saved one stands. */
  dropText() {
    this.typed = null
    this.textProblems = []
    if (this.conflictOf === 'text') this.conflicts = []
    this.settle()
    this.keep()
    this.changed()
  }

  /** Takes back the edits that the server refused. */
  dropRefused() {
    this.refusal = null
    this.queue = this.queue.slice(1)
    this.steps.drop()
    this.settle()
    this.keep()
    this.changed()
    void this.pump()
  }

  decide(conflict: ValueConflict, keep: Keep) {
    this.conflicts = this.conflicts.filter((c) => c.pointer !== conflict.pointer)
    if (this.conflictOf === 'text') this.decisions.set(conflict.pointer, keep)
    else {
      const [first, ...rest] = this.queue
      const left = first && decided(first, conflict, keep)
      this.queue = left && left.edits.length > 0 ? [left, ...rest] : rest
    }
    if (this.conflicts.length === 0) {
      this.textDue = true
      this.settle()
      void this.pump()
    }
    this.keep()
    this.changed()
  }

  /** Sends now what waits; done when it has been tried. */
  async flush(): Promise<void> {
    if (this.typed) this.textDue = true
    await this.pump()
  }

  /** Tries again at once after a lost answer. */
  retry() {
    this.attempts = 0
    this.refusal = null
    void this.flush()
  }

  private savedText(): string {
    const pending = this.queue.flatMap((b) => b.edits)
    return pending.length === 0 ? this.view.text : editText(this.view.text, pending)
  }

  private put(edits: readonly Edit[]) {
    if (edits.length === 0) return
    this.queue = enqueue(this.queue, edits)
    this.refusal = null
    if (this.saving !== 'sending' && this.saving !== 'lost' && this.conflicts.length === 0) this.saving = 'waiting'
    this.after('send', VALUES_PAUSE, () => this.pump())
    this.keep()
    this.changed()
  }

  private pump(): Promise<void> {
    this.busy ??= this.send().finally(() => {
      this.busy = null
      this.changed()
    })
    return this.busy
  }

  private async send(): Promise<void> {
    try {
      while (this.queue.length > 0 && this.conflicts.length === 0 && !this.refusal) await this.sendValues()
      if (this.typed && this.textDue && this.conflicts.length === 0 && !this.refusal) await this.sendText()
      this.attempts = 0
      this.settle()
    } catch (error) {
      if (isLost(error)) {
        this.saving = 'lost'
        this.after('retry', RETRIES[Math.min(this.attempts, RETRIES.length - 1)], () => void this.pump())
        this.attempts += 1
      } else {
        this.refusal = error instanceof ApiProblem ? error : unexpected(error)
        this.settle()
      }
    }
    this.keep()
  }

  private async sendValues() {
    const [batch, ...rest] = this.queue
    this.queue = [{ ...batch, tried: true }, ...rest]
    this.saving = 'sending'
    this.keep()
    this.changed()
    try {
      const view = await this.sender.values(batch.edits)
      this.queue = this.queue.slice(1)
      this.took(view)
    } catch (error) {
      if (!(error instanceof ApiProblem) || isLost(error)) throw error
      this.queue = [{ ...batch, tried: false }, ...this.queue.slice(1)]
      if (error.code === 'value-conflict') {
        this.took(await this.sender.fresh(), { saved: false })
        this.conflictOf = 'values'
        this.conflicts = error.extra.conflicts as ValueConflict[]
      } else this.refusal = error
    }
  }

  /** Brings the typed text onto what was saved meanwhile, then saves it; at most a few times when others keep saving. */
  private async sendText() {
    for (let round = 0; round < 5 && this.typed; round += 1) {
      const read = readText(this.typed.text)
      if (!read.ok) {
        this.textProblems = read.problems
        return
      }
      if (this.typed.basis !== this.view.text && !this.takeIn()) return
      const sent = this.typed.text
      this.saving = 'sending'
      this.changed()
      try {
        const before = this.view.set
        const view = await this.sender.text(sent, this.view.revision)
        const edits = editsBetween(before, view.set)
        if (edits.length > 0) this.steps.add(edits, Date.now())
        this.steps.close()
        this.typed = this.typed.text === sent ? null : { text: this.typed.text, basis: view.text }
        this.textProblems = []
        this.took(view)
        if (this.typed) this.textDue = false
        return
      } catch (error) {
        if (!(error instanceof ApiProblem) || isLost(error)) throw error
        if (error.code === 'precondition-failed') this.took(await this.sender.fresh(), { saved: false })
        else if (Array.isArray(error.extra.problems)) {
          this.textProblems = error.extra.problems as TextProblem[]
          return
        } else {
          this.refusal = error
          return
        }
      }
    }
  }

  /** False when places are to be decided first. */
  private takeIn(): boolean {
    const typed = this.typed!
    const result = textOnto(typed.text, typed.basis, this.view.set, this.decisions)
    if (result.kind === 'conflicts') {
      this.conflictOf = 'text'
      this.conflicts = result.conflicts
      return false
    }
    this.decisions.clear()
    this.typed = { text: result.kind === 'text' ? result.text : typed.text, basis: this.view.text }
    return true
  }

  private took(view: ChangeView, { saved = true } = {}) {
    if (view.revision >= this.view.revision) this.view = view
    if (saved) this.savedAt = Date.now()
    this.onView(view)
  }

  /** What the saving has come to, once nothing is on its way. */
  private settle() {
    if (this.conflicts.length > 0 || this.refusal) this.saving = 'halted'
    else if (this.queue.length > 0) this.saving = 'waiting'
    else if (this.typed) this.saving = this.textProblems.length > 0 ? 'unread' : 'waiting'
    else this.saving = 'saved'
  }

  private keep() {
    this.storage.write(this.queue.length > 0 || this.typed ? { queue: this.queue, typed: this.typed } : null)
  }

  private after(name: 'send' | 'text' | 'keep' | 'retry', delay: number, work: () => unknown) {
    clearTimeout(this.timers.get(name))
    this.timers.set(name, setTimeout(work, delay))
  }

  private changed() {
    this.state = this.snapshot()
    for (const listener of this.listeners) listener()
  }

  private snapshot(): DraftState {
    const pending = this.queue.flatMap((b) => b.edits)
    return {
      view: this.view,
      set: laidOnto(this.view.set, pending),
      pending,
      text: this.typed?.text ?? this.savedText(),
      saving: this.saving,
      savedAt: this.savedAt,
      conflicts: this.conflicts,
      textProblems: this.textProblems,
      refusal: this.refusal,
      canUndo: this.steps.canUndo,
      canRedo: this.steps.canRedo,
    }
  }
}
