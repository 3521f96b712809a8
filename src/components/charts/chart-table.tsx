import { formatFixed, formatNumber } from '../../lib/format.ts'
import type { ChartNumbers } from './chart-numbers.ts'

/** More rows than a reader reads; the CSV holds all. */
const MOST = 400

/** The numbers of a chart in a box that scrolls by keyboard. */
export function ChartTable({ label, head, rows }: ChartNumbers & { label: string }) {
  const every = Math.max(1, Math.ceil(rows.length / MOST))
  const shown = every === 1 ? rows : rows.filter((_, i) => i % every === 0 || i === rows.length - 1)
  return (
    <div className="mt-2">
      <div className="max-h-[320px] overflow-auto border-y border-hairline" tabIndex={0} role="region" aria-label={label}>
        <table className="table table-dense text-13" aria-label={label}>
          <thead>
            <tr>
              {head.map((h) => (
                <th key={h} scope="col" className="end">
                  {h}
                </th>
              ))}
            </tr>
          </thead>
          <tbody>
            {shown.map((row, i) => (
              <tr key={i}>
                {row.map((v, j) => (
                  <td key={j} className="end num">
                    {typeof v === 'number' ? formatNumber(v, { digits: 5 }) : (v ?? '–')}
                  </td>
                ))}
              </tr>
            ))}
          </tbody>
        </table>
      </div>
      {every > 1 && (
        <p className="help">
          One row in {every} of {formatFixed(rows.length, 0)}; the csv holds all rows.
        </p>
      )}
    </div>
  )
}
