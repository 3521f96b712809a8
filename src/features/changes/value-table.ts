import type { Finding } from '../../../shared/contract/checks.ts'
import { byLaw } from '../../../shared/parameters/laws.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import { fromPointer } from '../../../shared/parameters/paths.ts'
import type { Origin } from '../../../shared/parameters/effective.ts'
import type { Parameter } from '../../../shared/registers/parameter-schema.ts'
import type { Role } from '../../../shared/registers/roles.ts'
import type { Showing } from './scope.ts'
import { isEditable, jointsOf, parametersOfFamily, valueAtPlace, type Place, type Schemas, type ValueAt } from './value-cells.ts'

/** A column of the table: a family's own values, or what one joint ends up with. */
export interface Column {
  key: string
  place: Place
  title: string
  /** null for a family */
  address: number | null
}

/** Columns of families, each with its joints after it. */
export const columnsOf = (set: MachineSet, families: readonly string[]): Column[] =>
  families.flatMap((family) => [
    { key: `family ${family}`, place: { kind: 'family', family } satisfies Place, title: `${set.families[family].name} family`, address: null },
    ...jointsOf(set, family).map((joint): Column => ({ key: joint, place: { kind: 'joint', joint, family }, title: set.joints[joint].name, address: set.joints[joint].address })),
  ])

const sameFigures = (a: ValueAt, b: ValueAt) =>
  a.parameter === b.parameter && a.value === b.value && a.own === b.own && a.origin === b.origin && a.released === b.released && a.releasedOwn === b.releasedOwn && a.inherited?.value === b.inherited?.value && a.inherited?.origin === b.inherited?.origin && a.changed === b.changed && a.originChanged === b.originChanged

/** What makes a row: firmware lines name the same thing differently, its role is what it does. */
export const rowId = (parameter: Parameter): string => parameter.role ?? parameter.name

/** The cells of a table, made as they are asked for; one whose figures are those of `before` is the very same object, so that it is not drawn anew. */
export class TableCells {
  private readonly made = new Map<string, ValueAt | null>()
  private readonly parameters = new Map<string, ReadonlyMap<string, Parameter>>()
  private readonly source: { set: MachineSet; base: MachineSet; schemas: Schemas }
  private before: TableCells | null

  constructor(source: { set: MachineSet; base: MachineSet; schemas: Schemas }, before: TableCells | null = null) {
    this.source = source
    this.before = before
    // One table back is enough: a chain of all of them would never be let go.
    if (before) before.before = null
  }

  isOf({ set, base, schemas }: { set: MachineSet; base: MachineSet; schemas: Schemas }): boolean {
    return this.source.set === set && this.source.base === base && this.source.schemas === schemas
  }

  /** Null where the place's firmware version has no such parameter. */
  at({ key, place }: Column, row: Parameter): ValueAt | null {
    const id = `${key}\n${rowId(row)}`
    const known = this.made.get(id)
    if (known !== undefined) return known
    const fresh = this.make(place, row)
    const last = this.before?.made.get(id)
    const cell = fresh && last && sameFigures(fresh, last) ? last : fresh
    this.made.set(id, cell)
    return cell
  }

  private make(place: Place, row: Parameter): ValueAt | null {
    const { set, base, schemas } = this.source
    const firmware = place.kind === 'joint' ? schemas[set.joints[place.joint]?.firmware] : undefined
    const parameter = place.kind === 'family' ? this.ofFamily(place.family).get(rowId(row)) : row.role === null ? firmware?.byName.get(row.name) : firmware?.byRole.get(row.role)
    return parameter && isEditable(parameter) ? valueAtPlace(set, base, place, parameter, schemas) : null
  }

  private ofFamily(family: string): ReadonlyMap<string, Parameter> {
    const known = this.parameters.get(family)
    if (known) return known
    const made = new Map(parametersOfFamily(this.source.set, family, this.source.schemas).map((p) => [rowId(p), p]))
    this.parameters.set(family, made)
    return made
  }
}

/** Every parameter of the families' firmware versions, once, by law. */
export function rowsOf(set: MachineSet, families: readonly string[], schemas: Schemas): { law: string; rows: Parameter[] }[] {
  const found = new Map<string, Parameter>()
  for (const family of families) for (const p of parametersOfFamily(set, family, schemas)) if (!found.has(rowId(p))) found.set(rowId(p), p)
  return byLaw([...found.values()]).map(({ law, things }) => ({ law, rows: things }))
}

const rolesOfLoop: Readonly<Record<string, readonly Role[]>> = {
  current: ['current.kp', 'current.ki'],
  velocity: ['velocity.kp', 'velocity.ki', 'velocity.window'],
  position: ['position.kp', 'position.ki'],
}

/** Values that findings outside policy are about, as "joint\nparameter": the place a finding blames, or the laws of the loop it judges. */
export function outOfPolicy(findings: readonly Finding[], set: MachineSet, schemas: Schemas): ReadonlySet<string> {
  const found = new Set<string>()
  for (const f of findings) {
    if (f.level !== 'concession needed' && f.level !== 'block') continue
    const [, , part, named] = f.pointer === undefined ? [] : fromPointer(f.pointer)
    for (const joint of f.joints) {
      if (part === 'values' && named !== undefined) found.add(`${joint}\n${named}`)
      else if (f.loop)
        for (const role of rolesOfLoop[f.loop] ?? []) {
          const parameter = schemas[set.joints[joint]?.firmware]?.byRole.get(role)
          if (parameter) found.add(`${joint}\n${parameter.name}`)
        }
    }
  }
  return found
}

/** Whether a cell is outside policy; a family's value is where a joint that inherits it is. */
export function isOutOfPolicy(out: ReadonlySet<string>, at: ValueAt | null, set: MachineSet): boolean {
  if (!at || out.size === 0) return false
  const { place, parameter: { name } } = at
  if (place.kind === 'joint') return out.has(`${place.joint}\n${name}`)
  return jointsOf(set, place.family).some((joint) => out.has(`${joint}\n${name}`) && !Object.hasOwn(set.joints[joint].values, name))
}

export interface RowFilter {
  showing: Showing
  /** rows in which a joint's value comes from there; null: any */
  origin: Origin | null
}

/** Whether a row is shown: one cell of it is enough. */
export function rowWanted({ showing, origin }: RowFilter, columns: readonly Column[], row: Parameter, cells: TableCells, policy: (at: ValueAt) => boolean): boolean {
  if (showing === 'all' && origin === null) return true
  return columns.some((column) => {
    const cell = cells.at(column, row)
    if (!cell) return false
    if (origin !== null && (column.place.kind !== 'joint' || cell.origin !== origin)) return false
    return showing === 'all' || (showing === 'changed' ? cell.changed || cell.originChanged : policy(cell))
  })
}
