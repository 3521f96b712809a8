import type { LetterLine } from '../drive-train-letters.ts'

/** A letter as formulas write it: k with a t below. */
export function LetterSymbol({ line }: { line: Pick<LetterLine, 'symbol' | 'sub'> }) {
  return (
    <span>
      {line.symbol}
      {line.sub && <sub className="text-[0.75em] leading-none">{line.sub}</sub>}
    </span>
  )
}
