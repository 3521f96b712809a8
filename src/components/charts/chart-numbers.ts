export interface ChartNumbers {
  /** Column names with units, as "time, ms". */
  head: readonly string[]
  rows: readonly (readonly (string | number | null | undefined)[])[]
}
