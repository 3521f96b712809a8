/** A side as its address names it, taken apart for the pickers. */
export interface SideRef {
  kind: string
  /** the side without a joint: "release:dunlin@1.7.0" */
  whole: string
  /** joint it is narrowed to; '' for all */
  joint: string
}

/** Takes a side's address apart: "release:dunlin@1.7.0:r3-knee". Only releases and changes are narrowed by a joint. */
export function readSideRef(ref: string): SideRef {
  const match = /^(release|change):([^:]+)(?::([a-z0-9-]+))?$/.exec(ref)
  if (!match) return { kind: ref.slice(0, Math.max(0, ref.indexOf(':'))), whole: ref, joint: '' }
  return { kind: match[1], whole: `${match[1]}:${match[2]}`, joint: match[3] ?? '' }
}

export const writeSideRef = (whole: string, joint: string) => (joint === '' ? whole : `${whole}:${joint}`)

/** The machine that an address is of, as far as it says; a read-back's does not. */
export function machineOfRef(ref: string): string | null {
  const { kind, whole } = readSideRef(ref)
  const rest = whole.slice(kind.length + 1)
  if (kind === 'release') return rest.split('@')[0] || null
  if (kind === 'revision') return rest.split('/')[0] || null
  return kind === 'change' ? rest.replace(/-\d+$/, '') || null : null
}
