import type { WorkplaceView } from '../../../../shared/contract/people.ts'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'

type DemoSignIn = WorkplaceView['signIns'][number]

/** The invented people of the demo; one press fills the form. */
export function DemoSignIns({ signIns, onChoose }: { signIns: readonly DemoSignIn[]; onChoose: (signIn: DemoSignIn) => void }) {
  return (
    <section aria-labelledby="demo-people">
      <SectionHeading id="demo-people" aux="invented; one press fills the form">
        People of the demo
      </SectionHeading>
      <ul className="mt-1">
        {signIns.map((s) => (
          <li key={s.email} className="border-b border-hairline last:border-rule">
            <button type="button" className="grid w-full gap-x-4 rounded-none border-0 bg-transparent px-2 py-[7px] text-left hover:bg-brass-wash sm:grid-cols-[10rem_1fr_auto] sm:items-baseline" onClick={() => onChoose(s)}>
              <span className="font-medium">{s.name}</span>
              <span className="text-13 text-ink-2">{s.roles}</span>
              <span className="num text-12 text-ink-2">{s.password}</span>
            </button>
          </li>
        ))}
      </ul>
    </section>
  )
}
