/** The last so many values by key; the one asked for longest ago goes first. */
export class Recent<V> {
  private readonly kept = new Map<string, V>()
  private readonly most: number

  constructor(most: number) {
    this.most = most
  }

  get(key: string): V | undefined {
    const value = this.kept.get(key)
    if (value === undefined) return undefined
    this.kept.delete(key)
    this.kept.set(key, value)
    return value
  }

  set(key: string, value: V): void {
    this.kept.delete(key)
    this.kept.set(key, value)
    if (this.kept.size > this.most) this.kept.delete(this.kept.keys().next().value!)
  }
}
