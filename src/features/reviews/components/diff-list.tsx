import { Arrow } from '../../../components/ui/arrow.tsx'
import { rowProps, type RowTools } from '../row-tools.ts'
import type { Section } from '../sections-of.ts'
import { BytesChange, OriginChange, percentText, RegisterWords, sideText } from './diff-side.tsx'
import { EffectCell } from './effect-cell.tsx'
import { RowEnd } from './row-end.tsx'

/** The same rows one under the other, for narrow screens. */
export function DiffList({ sections, tools }: { sections: readonly Section[]; tools: RowTools }) {
  return (
    <div className="md:hidden">
      {sections.map((s) => (
        <section key={s.title} className="mt-3">
          <h4 className="border-b border-hairline text-13 text-ink-2">{s.title}</h4>
          <ul>
            {s.rows.map((r) => (
              <li key={r.key} {...rowProps(tools, r)} className="scroll-my-16 border-b border-hairline py-2">
                <div className="flex items-center justify-between gap-2">
                  <span>{r.title}</span>
                  <span className="flex items-center gap-2">
                    {percentText(r) && (
                      <span className="num text-13">
                        {percentText(r)}
                        <span className="unit"> %</span>
                      </span>
                    )}
                    <RowEnd row={{ ...r, title: `${r.title}, ${s.of}` }} tools={tools} />
                  </span>
                </div>
                <p>
                  <span className="num">{sideText(r.before)}</span>
                  <Arrow />
                  <span className="num font-medium text-brass">{sideText(r.after)}</span> <span className="unit text-13">{r.unit}</span>
                </p>
                <p className="flex flex-wrap gap-x-3 text-13">
                  <RegisterWords row={r} />
                  <BytesChange row={r} />
                  {!tools.effects && <OriginChange row={r} />}
                </p>
                {tools.effects && <EffectCell effect={tools.effects.get(r.key)} row={r} />}
              </li>
            ))}
          </ul>
        </section>
      ))}
    </div>
  )
}
