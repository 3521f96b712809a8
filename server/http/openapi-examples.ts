import type { RouteSpec } from './route.ts'

/** What stands for each name in a path, in every example. */
export const exampleParams: Record<string, string> = {
  machine: 'dunlin', joint: 'l1-knee', family: 'knee', bus: 'fore', version: '1.0.0', change: 'dunlin-2', line: 'hinge', serial: 'H-0318', format: 'hex', person: '1', comment: '1',
}

/**
 * Bodies by route, in the order in which they can be sent one after another to a workplace whose machine "dunlin" has the release 1.0.0;
 * a test sends them. Hashes stand for those read from the change, passwords for one's own.
 */
export const exampleBodies: Record<string, unknown> = {
  'post /machines': { key: 'heron', name: 'Heron', description: 'long-necked weed cutter' },
  'patch /machines/:machine': { description: 'six-legged mud-flat survey walker' },
  'post /firmware': { key: 'pinion', name: 'Pinion', description: 'boards of the seed-sorting arm' },
  'patch /firmware/:line': { description: 'leg boards in position mode' },
  'post /changes': { machine: 'dunlin', title: 'Stiffer knee for soft mud', reason: 'On the flats the shank sinks and the knee gives way under the step load.' },
  'patch /changes/:change': { reason: 'On the flats the shank sinks 4 to 6 cm and the knee gives way under the step load.' },
  'patch /changes/:change/values': { edits: [{ pointer: '/families/knee/values/speedLimit', from: 6, to: 5.5 }] },
  'post /changes/:change/comments': { text: 'Was the hum at 11 Hz there with the covers on?', on: { kind: 'change' } },
  'post /changes/:change/submit': {},
  'post /changes/:change/return': { reason: 'The log of the wet rope is missing.' },
  'post /changes/:change/cancel': { reason: 'The shank was replaced by a wider one.' },
  'post /machines/:machine/flashes': { serial: 'H-0318', joint: 'l1-knee', release: '1.0.0' },
  'post /machines/:machine/flashes/bulk': { release: '1.0.0', boards: [{ joint: 'r1-knee', serial: 'H-0335' }] },
  'post /machines/:machine/boards': { serial: 'H-0318', joint: null, note: 'taken out for the wet test' },
  'post /account/bench-keys': { name: 'bench computer by the window', machines: ['dunlin'], days: 90, password: 'a long enough password' },
  'post /people': { name: 'Yuna Brandt', email: 'yuna.brandt@dunlin.example', roles: [{ role: 'observer', machine: 'dunlin' }] },
  'post /machines/:machine/releases/:version/withdraw': { version: '1.0.0', reason: 'The hip oscillates at 41 Hz above 2.1 A.' },
}

export const exampleOf = ({ method, path }: Pick<RouteSpec, 'method' | 'path'>): unknown => exampleBodies[`${method} ${path}`]
