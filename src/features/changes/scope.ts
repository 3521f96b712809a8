import type { Origin } from '../../../shared/parameters/effective.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import { jointsOf } from './value-cells.ts'

export const editViews = ['cascade', 'table', 'text'] as const
export type EditView = (typeof editViews)[number]
export const showings = ['all', 'changed', 'policy'] as const
/** Which rows of the table are shown: all, those that differ from the base, those that a finding outside policy is about. */
export type Showing = (typeof showings)[number]
export const columnChoices = ['all', 'family'] as const
/** Which joints stand in the table's columns. */
export type ColumnChoice = (typeof columnChoices)[number]
export const origins = ['firmware', 'family', 'joint'] as const satisfies readonly Origin[]

/** Where the editor looks: a view, a family, perhaps one of its joints. All of it stands in the address. */
export interface Scope {
  view: EditView
  family: string | null
  joint: string | null
  showing: Showing
  columns: ColumnChoice
  /** only rows in which a joint's value comes from there */
  origin: Origin | null
}

const oneOf = <T extends string>(values: readonly T[], given: string | null, otherwise: T): T => values.find((v) => v === given) ?? otherwise

/** The scope that an address asks for, as far as the set has it: the family altered most, else the first. */
export function scopeOf(search: URLSearchParams, set: MachineSet, prefer: string | null): Scope {
  const joint = search.get('joint')
  const has = (family: string | null): family is string => family !== null && Object.hasOwn(set.families, family)
  const ofJoint = joint !== null && Object.hasOwn(set.joints, joint) ? set.joints[joint].family : null
  const asked = search.get('family')
  const family = has(ofJoint) ? ofJoint : has(asked) ? asked : has(prefer) ? prefer : (Object.keys(set.families)[0] ?? null)
  return { view: oneOf(editViews, search.get('view'), 'cascade'), family, joint: has(ofJoint) ? joint : null, showing: oneOf(showings, search.get('show'), 'all'), columns: oneOf(columnChoices, search.get('columns'), 'all'), origin: origins.find((o) => o === search.get('origin')) ?? null }
}

/** The query of an address that looks elsewhere. */
export function scopeQuery(scope: Scope, over: Partial<Scope>): string {
  const next = { ...scope, ...over }
  const query = new URLSearchParams({ view: next.view })
  if (next.joint) query.set('joint', next.joint)
  else if (next.family) query.set('family', next.family)
  if (next.showing !== 'all') query.set('show', next.showing)
  if (next.columns !== 'all') query.set('columns', next.columns)
  if (next.origin !== null) query.set('origin', next.origin)
  return `?${query.toString()}`
}

/** Joints that a scope is about. */
export const jointsInScope = (scope: Scope, set: MachineSet): string[] => (scope.joint ? [scope.joint] : scope.family ? jointsOf(set, scope.family) : [])
