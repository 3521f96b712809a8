import type { MachineSummary } from '../../shared/contract/machines.ts'
import type { GrantView, Me } from '../../shared/contract/people.ts'
import type { MenuItem } from '../components/ui/menu.tsx'
import type { Place } from '../components/ui/top-bar.tsx'
import { paths } from './paths.ts'
import { openTour } from '../lib/tour-state.ts'
import { setTheme, themes } from '../lib/theme.ts'
import type { Theme } from '../lib/theme.ts'

export function placesFor(_me: Me): Place[] {
  return [
    { to: paths.desk(), label: 'desk', end: true },
    { to: paths.changes(), label: 'changes' },
    { to: paths.releases(), label: 'releases' },
    { to: paths.boards(), label: 'boards' },
    { to: paths.firmware(), label: 'firmware' },
    { to: paths.ledger(), label: 'ledger' },
  ]
}

/** Key of the machine whose page, or whose change's page, an address shows. */
export function machineOfPath(pathname: string): string | null {
  const [, kind, key] = pathname.split('/')
  if (key === undefined) return null
  if (kind === 'machines') return decodeURIComponent(key)
  // A change is called by its machine's key and its number.
  return kind === 'changes' ? decodeURIComponent(key).replace(/-\d+$/, '') : null
}

export const machineItems = (machines: readonly MachineSummary[], shown: string | null): MenuItem[] => [
  { label: 'All machines', to: paths.machines(), current: shown === null },
  ...machines.filter((m) => !m.retired).map((m) => ({ label: m.name, to: paths.machine(m.key), current: m.key === shown, note: m.currentVersion ?? undefined })),
]

/** "peer reviewer, builder": each role once, whatever the machines. */
export const rolesInWords = (roles: readonly GrantView[]): string => [...new Set(roles.map((r) => r.role))].join(', ') || 'no role yet'

export function personItems({ theme, mayKeepPeople, mayKeepMail, mayKeepBackups, signOut }: { theme: Theme; mayKeepPeople: boolean; mayKeepMail: boolean; mayKeepBackups: boolean; signOut: () => void }): MenuItem[] {
  return [
    { label: 'account', to: paths.account() },
    { label: mayKeepPeople ? 'people and roles' : 'people', to: paths.people() },
    { label: 'policy', to: paths.policy() },
    { label: 'keys', to: paths.keys() },
    { label: 'compare', to: paths.compare() },
    ...(mayKeepMail ? [{ label: 'mail', to: paths.mail() }] : []),
    ...(mayKeepBackups ? [{ label: 'backups', to: paths.backups() }] : []),
    { label: 'help', to: paths.help() },
    { label: 'tour', onSelect: openTour },
    { label: 'API reference', to: paths.apiReference() },
    ...themes.map((t) => ({ label: t === 'system' ? 'light or dark by system' : t, current: t === theme, note: t === theme ? 'shown' : undefined, onSelect: () => setTheme(t) })),
    { label: 'sign out', onSelect: signOut },
  ]
}
