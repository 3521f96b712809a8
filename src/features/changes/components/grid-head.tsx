import { HexAddress } from '../../../components/ui/hex-address.tsx'
import type { ColumnSpan } from '../use-column-window.ts'
import type { Column } from '../value-table.ts'

/** px; the head column stays while the others move under it */
export const gridWidths = { head: 216, column: 100 } as const

export interface GridHeadProps {
  columns: readonly Column[]
  joint: string | null
  spans: readonly ColumnSpan[]
}

/** Names of the columns: a family before its joints, each joint with its address. */
export function GridHead({ columns, joint, spans }: GridHeadProps) {
  return (
    <thead>
      <tr>
        <th scope="col" className="left-0 !z-[6]">
          Parameter
        </th>
        {spans.flatMap(({ index, gap }) => [
          gap > 0 && <td key={`gap ${index}`} role="presentation" colSpan={gap} className="sticky top-0 z-[5] !border-ink bg-paper" />,
          index < columns.length && (
            <th key={columns[index].key} scope="col" aria-colindex={index + 2} className={`end !whitespace-normal ${columns[index].key === joint ? '!text-ink' : ''} ${index > 0 && columns[index].place.kind === 'family' ? 'border-l border-l-rule' : ''}`}>
              {columns[index].title}
              <span className="block font-normal">{columns[index].address === null ? 'all of it' : <HexAddress address={columns[index].address} />}</span>
            </th>
          ),
        ])}
      </tr>
    </thead>
  )
}
