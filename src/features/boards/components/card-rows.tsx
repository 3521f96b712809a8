import type { CardRow } from '../../../../shared/contract/boards.ts'
import { valueText } from '../../../components/layout/value-text.ts'
import { HexAddress } from '../../../components/ui/hex-address.tsx'

/** Registers of a card: what stands in each, in units and in bytes. */
export function CardRows({ rows, address = true }: { rows: readonly CardRow[]; address?: boolean }) {
  return (
    <table className="w-full border-collapse text-13 print:text-[10px] print:leading-[12px] print:[&_td]:py-0 print:[&_td]:leading-[12px] print:[&_th]:py-0 print:[&_th]:text-[9px]">
      <thead>
        <tr className="border-b border-ink text-left text-12 text-ink-2">
          {address && <th className="py-1 pr-2 font-medium">at</th>}
          <th className="py-1 pr-2 font-medium">register</th>
          <th className="py-1 pr-2 text-right font-medium">value</th>
          <th className="py-1 text-right font-medium">bytes</th>
        </tr>
      </thead>
      <tbody>
        {rows.map((r) => (
          <tr key={r.parameter} className="border-b border-hairline align-baseline">
            {address && (
              <td className="pr-2 text-12 text-ink-2 print:text-[9px]">
                <HexAddress address={r.address} />
              </td>
            )}
            <td className="py-[3px] pr-2 print:py-0">
              {r.title}
              {r.boardBound && <span className="text-12 text-ink-2 print:text-[9px]"> of this board</span>}
            </td>
            <td className="pr-2 text-right whitespace-nowrap">
              <span className="num">{valueText(r.value)}</span>
              {r.unit && <span className="unit ml-[.22em]">{r.unit}</span>}
            </td>
            <td className="num text-right text-12 whitespace-nowrap text-ink-2 max-[419px]:text-[11px] print:text-[9px]">{r.bytes}</td>
          </tr>
        ))}
      </tbody>
    </table>
  )
}
