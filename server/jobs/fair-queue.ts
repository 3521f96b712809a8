/** What waits, in turns: each asker's own in the order they came, askers one after the other, urgent things of all before the rest. */
export class FairQueue<T> {
  private readonly lanes: [urgent: Map<number, T[]>, rest: Map<number, T[]>] = [new Map(), new Map()]
  private count = 0

  get size(): number {
    return this.count
  }

  waitingOf(asker: number): number {
    return this.lanes.reduce((sum, lane) => sum + (lane.get(asker)?.length ?? 0), 0)
  }

  put(asker: number, item: T, { urgent }: { urgent: boolean }): void {
    const lane = this.lanes[urgent ? 0 : 1]
    const own = lane.get(asker)
    if (own) own.push(item)
    else lane.set(asker, [item])
    this.count += 1
  }

  /** The next in turn; its asker goes to the end. */
  take(): T | undefined {
    for (const lane of this.lanes) {
      for (const [asker, own] of lane) {
        const item = own.shift()!
        lane.delete(asker)
        if (own.length > 0) lane.set(asker, own)
        this.count -= 1
        return item
      }
    }
    return undefined
  }

  /** Takes out everything that no longer need wait; returns it. */
  drop(gone: (item: T) => boolean): T[] {
    const dropped: T[] = []
    for (const lane of this.lanes)
      for (const [asker, own] of [...lane]) {
        const kept = own.filter((item) => !gone(item))
        if (kept.length === own.length) continue
        dropped.push(...own.filter(gone))
        this.count -= own.length - kept.length
        if (kept.length > 0) lane.set(asker, kept)
        else lane.delete(asker)
      }
    return dropped
  }
}
