/** A figure of a case file: `tol` is absolute, `tol_rel` relative to the value. */
export interface Figure {
  readonly value: number | null
  readonly tol?: number
  readonly tol_rel?: number
  readonly [key: string]: unknown
}

/** Counts figures and keeps a line for each that falls short. */
export class Tally {
  readonly lines: string[] = []
  passed = 0
  failed = 0

  pass(ok: boolean, text: () => string): void {
    if (ok) {
      this.passed++
    } else {
      this.failed++
      this.lines.push(text())
    }
  }

  fail(text: string): void {
    this.failed++
    this.lines.push(text)
  }

  same(name: string, ours: unknown, theirs: unknown): void {
    this.pass(ours === theirs, () => `${name}: ${String(ours)} where ${String(theirs)} is expected`)
  }

  close(name: string, ours: number | null, theirs: number, tol: number): void {
    this.pass(ours !== null && Math.abs(ours - theirs) <= tol, () => `${name}: ${String(ours)} where ${theirs} ± ${tol} is expected`)
  }

  /** A figure with its own tolerance; a null value wants no number of us either. */
  figure(name: string, figure: Figure, ours: number | null): void {
    if (figure.value === null) {
      this.pass(ours === null, () => `${name}: ${String(ours)} where none is expected (${String(figure.reads)})`)
      return
    }
    if (figure.tol === undefined && figure.tol_rel === undefined) {
      this.fail(`${name}: the figure states no tolerance`)
      return
    }
    this.close(name, ours, figure.value, figure.tol ?? (figure.tol_rel as number) * Math.abs(figure.value))
  }

  /** Keys that no check knows count as failed: nothing in a file is passed over in silence. */
  known(name: string, object: object, keys: readonly string[]): void {
    for (const key of Object.keys(object)) if (!keys.includes(key)) this.fail(`${name}.${key}: this figure is not known here`)
  }

  /** Runs one case; what it throws is one failure more. */
  guarded(name: string, run: () => void): void {
    try {
      run()
    } catch (error) {
      this.fail(`${name}: ${error instanceof Error ? error.message : String(error)}`)
    }
  }
}
