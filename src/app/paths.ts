/** Every address of the client. */
const part = encodeURIComponent

export const paths = {
  desk: () => '/',
  signIn: (next?: string) => (next && next !== '/' ? `/sign-in?next=${part(next)}` : '/sign-in'),
  forgotten: () => '/forgotten',
  link: (secret: string) => `/links/${part(secret)}`,
  account: () => '/account',
  people: () => '/people',
  person: (id: number) => `/people/${id}`,
  mail: () => '/mail',
  ledger: (filter: { machine?: string; act?: string; person?: string } = {}) => {
    const query = new URLSearchParams(Object.entries(filter).filter(([, v]) => v)).toString()
    return query ? `/ledger?${query}` : '/ledger'
  },
  ledgerEntry: (entry: number) => `/ledger?entry=${entry}`,
  policy: (machine?: string) => (machine ? `/policy?machine=${part(machine)}` : '/policy'),
  machines: () => '/machines',
  machine: (machine: string) => `/machines/${part(machine)}`,
  bus: (machine: string, bus: string) => `/machines/${part(machine)}/bus/${part(bus)}`,
  joint: (machine: string, joint: string) => `/machines/${part(machine)}/joints/${part(joint)}`,
  evidence: (machine: string, number: number) => `/machines/${part(machine)}/evidence/${number}`,
  family: (machine: string, family: string) => `/machines/${part(machine)}/families/${part(family)}`,
  firmware: () => '/firmware',
  firmwareComparison: (line: string, { from, to }: { from?: string; to?: string } = {}) => {
    const query = new URLSearchParams(Object.entries({ from, to }).flatMap(([k, v]) => (v ? [[k, v]] : []))).toString()
    return `/firmware/${part(line)}/compare${query && `?${query}`}`
  },
  firmwareVersion: (line: string, version: string) => `/firmware/${part(line)}/${part(version)}`,
  changes: (machine?: string) => (machine ? `/changes?machine=${part(machine)}` : '/changes'),
  change: (change: string) => `/changes/${part(change)}`,
  changeCheck: (change: string) => `/changes/${part(change)}/check`,
  changeReview: (change: string) => `/changes/${part(change)}/review`,
  releases: (machine?: string) => (machine ? `/releases?machine=${part(machine)}` : '/releases'),
  release: (machine: string, version: string) => `/machines/${part(machine)}/releases/${part(version)}`,
  /** Sides as the server names them: "release:dunlin@1.7.0", "change:dunlin-47:r3-knee", … */
  compare: (sides: { a?: string; b?: string } = {}) => {
    const query = new URLSearchParams(Object.entries(sides).flatMap(([k, v]) => (v ? [[k, v]] : []))).toString()
    return `/compare${query && `?${query}`}`
  },
  help: (topic?: string) => (topic ? `/help#${part(topic)}` : '/help'),
  apiReference: () => '/api-reference',
  keys: () => '/keys',
  backups: () => '/backups',
  boards: (filter: { machine?: string; state?: string; release?: string } = {}) => {
    const query = new URLSearchParams(Object.entries(filter).filter(([, v]) => v)).toString()
    return query ? `/boards?${query}` : '/boards'
  },
  board: (serial: string) => `/boards/${part(serial)}`,
  audit: (machine: string) => `/machines/${part(machine)}/audit`,
  /** `withdrawn`: to record what was flashed although the newest release is withdrawn */
  bench: (machine: string, { joint, serial, withdrawn }: { joint?: string; serial?: string; withdrawn?: boolean } = {}) => {
    const query = new URLSearchParams(Object.entries({ joint, serial, withdrawn: withdrawn ? 'yes' : undefined }).flatMap(([k, v]) => (v ? [[k, v]] : []))).toString()
    return `/machines/${part(machine)}/bench${query && `?${query}`}`
  },
  benchCard: (machine: string, version: string, joint: string) => `/machines/${part(machine)}/releases/${part(version)}/joints/${part(joint)}/card`,
  search: (text: string) => `/search?q=${part(text)}`,
}
