import { isRole } from '../registers/roles.ts'
import { figureHelp } from './figure-help.ts'
import { findingHelp } from './finding-help.ts'
import { roleHelp } from './role-help.ts'
import type { HelpKind, HelpTopic } from './topic.ts'

export const helpGroups: Record<HelpKind, { title: string; topics: Readonly<Record<string, HelpTopic>> }> = {
  role: { title: 'Parameters', topics: roleHelp },
  finding: { title: 'Findings', topics: findingHelp },
  figure: { title: 'Figures', topics: figureHelp },
}

/** The explanation that a name such as "finding:phase margin" asks for; null where there is none. A finding about a single value goes by "value". */
export function findHelp(name: string): HelpTopic | null {
  const [, kind, key] = /^(role|finding|figure):(.+)$/.exec(name) ?? []
  if (kind === 'role') return isRole(key) ? roleHelp[key] : null
  if (kind === 'finding') return findingHelp[key] ?? (key.startsWith('value ') ? findingHelp.value : null)
  return kind === 'figure' ? (figureHelp[key] ?? null) : null
}
