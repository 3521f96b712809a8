import type { DiffView } from '../../../shared/contract/reviews.ts'

interface Names {
  joint: (key: string) => string
  family: (key: string) => string
  bus: (key: string) => string
}

/** What the row with a key is called on the page: "Velocity gain, Knee family". */
export function titleOf(diff: DiffView, key: string, nameOf: Names): string {
  for (const g of diff.groups) {
    const row = g.rows.find((r) => r.key === key)
    if (row) return `${row.title}, ${diff.groups.filter((o) => o.family === g.family).length === 1 ? `${nameOf.family(g.family)} family` : g.joints.map(nameOf.joint).join(', ')}`
    for (const own of g.own) {
      const found = own.rows.find((r) => r.key === key)
      if (found) return `${found.title}, ${nameOf.joint(own.joint)}`
    }
  }
  const joint = diff.joints.find((j) => j.key === key)
  if (joint) return nameOf.joint(joint.joint)
  for (const d of diff.driveTrains) for (const r of d.rows) if (r.key === key) return `${r.field}, drive train of the ${nameOf.family(d.family)} family`
  for (const d of diff.families) for (const r of d.rows) if (r.key === key) return `${r.field}, ${nameOf.family(d.family)} family`
  for (const d of diff.buses) for (const r of d.rows) if (r.key === key) return `${r.field}, bus ${nameOf.bus(d.bus)}`
  return key
}
