import { Link } from 'react-router'
import type { MachineSet } from '../../../../shared/parameters/machine-set.ts'
import { Chevron } from '../../../components/ui/chevron.tsx'
import { HexAddress } from '../../../components/ui/hex-address.tsx'
import { Menu } from '../../../components/ui/menu.tsx'
import { count } from '../../../lib/format.ts'
import { scopeQuery, type Scope } from '../scope.ts'
import { jointsOf, parameterOfJoint, type Schemas } from '../value-cells.ts'

export interface ScopeChipsProps {
  scope: Scope
  set: MachineSet
  base: MachineSet
  schemas: Schemas
  /** families and joints that the change alters, by key */
  altered: { families: ReadonlySet<string>; joints: ReadonlySet<string> }
}

/** What is looked at: a family, or one of its joints. A joint says when it holds values of its own, or has just given them up. */
export function ScopeChips({ scope, set, base, schemas, altered }: ScopeChipsProps) {
  const { family } = scope
  if (!family) return null
  const joints = jointsOf(set, family)
  const families = Object.entries(set.families)
  return (
    <nav aria-label="family and joint" className="flex flex-wrap items-center gap-2">
      {families.length > 1 && (
        <Menu
          label="family"
          items={families.map(([key, f]) => ({
            label: f.name,
            to: scopeQuery(scope, { family: key, joint: null }),
            current: key === family,
            note: altered.families.has(key) ? 'altered' : count(jointsOf(set, key).length, 'joint'),
          }))}
        >
          family
          <Chevron />
        </Menu>
      )}
      <Chip to={scopeQuery(scope, { joint: null })} current={scope.joint === null} strong={`${set.families[family].name} family`} quiet={count(joints.length, 'joint')} />
      {joints.map((joint) => (
        <Chip
          key={joint}
          to={scopeQuery(scope, { joint, family })}
          current={scope.joint === joint}
          strong={set.joints[joint].name}
          quiet={<HexAddress address={set.joints[joint].address} />}
          note={ownWords(joint, set, base, schemas)}
          altered={altered.joints.has(joint)}
        />
      ))}
    </nav>
  )
}

function Chip({ to, current, strong, quiet, note, altered = false }: { to: string; current: boolean; strong: string; quiet: React.ReactNode; note?: string; altered?: boolean }) {
  return (
    <Link to={to} aria-current={current ? 'true' : undefined} className={`inline-flex min-h-[30px] items-baseline gap-[6px] rounded border px-[10px] py-[3px] whitespace-nowrap text-ink no-underline ${current ? 'border-brass bg-brass-wash' : 'border-hairline bg-sheet hover:border-rule'}`}>
      <span className="font-medium">{strong}</span>
      <span className="text-12 text-ink-2">{quiet}</span>
      {note && <span className={`text-12 ${altered ? 'text-brass' : 'text-ink-2'}`}>{note}</span>}
    </Link>
  )
}

/** "own velocity gain", "2 of its own, 1 given up". Values bound to its board are a joint's own by nature and not counted. */
function ownWords(joint: string, set: MachineSet, base: MachineSet, schemas: Schemas): string | undefined {
  const free = (names: string[]) => names.filter((n) => !parameterOfJoint(set, joint, n, schemas)?.boardBound)
  const now = free(Object.keys(set.joints[joint].values))
  const before = free(Object.keys(base.joints[joint]?.values ?? {}))
  const given = before.filter((n) => !now.includes(n))
  const title = (name: string) => (parameterOfJoint(set, joint, name, schemas)?.title ?? name).toLowerCase()
  const parts = [
    now.length === 1 ? `own ${title(now[0])}` : now.length > 1 ? `${now.length} of its own` : '',
    given.length === 1 ? `own ${title(given[0])} given up` : given.length > 1 ? `${given.length} given up` : '',
  ].filter(Boolean)
  return parts.join(', ') || undefined
}
