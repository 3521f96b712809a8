import { matrix } from '../modules/people/permissions.ts'
import { errorCodes, statusOfCode, titleOfCode } from './errors.ts'
import { exampleOf, exampleParams } from './openapi-examples.ts'
import { openPaths } from './openapi-open-paths.ts'
import type { RouteSpec } from './route.ts'

/**
 * The API as an OpenAPI 3.1 document, made from the table of routes and the very schemas that validate.
 *
 * Source of the form: OpenAPI Specification 3.1.0, sections 4.7 and 4.8.
 */
export interface OpenApiDocument {
  openapi: string
  info: object
  servers: object[]
  tags: { name: string; description: string }[]
  paths: Record<string, Record<string, unknown>>
  components: Record<string, unknown>
}

const tagWords = {
  people: 'who signs in, roles, invitations, sessions', machines: 'machines, buses, families and joints as they were last released', changes: 'drafts and their life', checks: 'the check of a change: findings, margins, responses',
  reviews: 'what alters and what it does; signatures', comments: 'comments on changes', releases: 'versions, images and kits', boards: 'boards, flashes and read-backs', evidence: 'bench logs', firmware: 'firmware lines, their versions and schemas',
  comparisons: 'any two states beside each other', policy: 'what findings are held to', ledger: 'the chained record of every act', keys: 'the keys that kits and checkpoints are signed with', backups: 'copies of the workplace', mail: 'mails queued and sent', search: 'find what is called like that',
} as const
type Tag = keyof typeof tagWords

/** The part of the program that a path belongs to, by its most telling segment. */
const bySegment: [RegExp, Tag][] = [
  [/evidence|\/logs?\b/, 'evidence'],
  [/\/check\b/, 'checks'],
  [/comments/, 'comments'],
  [/carry-over/, 'firmware'],
  [/compare-dump|boards|flashes|bench-tasks|card$/, 'boards'],
  [/\/compare/, 'comparisons'],
  [/\/(diff|effects|reading|version|sign|release|events)$|reading\//, 'reviews'],
  [/releases|bench-image/, 'releases'],
  [/policy/, 'policy'],
]
function tagOf(path: string): Tag {
  const found = bySegment.find(([pattern]) => pattern.test(path))
  if (found && !path.startsWith('/firmware')) return found[1]
  const [, first] = path.split('/')
  return first in tagWords ? (first as Tag) : 'people'
}

const plain = (schema: object): object => JSON.parse(JSON.stringify(schema)) as object

/** The form of every refusal (RFC 9457). */
const problem = {
  type: 'object',
  description: 'What happened, what was kept, and what to do (RFC 9457).',
  required: ['type', 'title', 'status', 'detail'],
  properties: {
    type: { type: 'string', description: `ends in the kind of refusal: ${errorCodes.join(', ')}` },
    title: { type: 'string' },
    status: { type: 'integer' },
    detail: { type: 'string' },
    instance: { type: 'string' },
    errors: { type: 'array', items: { type: 'object', required: ['pointer', 'detail'], properties: { pointer: { type: 'string', description: 'RFC 6901, into the body sent' }, detail: { type: 'string' } } } },
  },
}

const answered = {
  json: (description: string, etag: boolean) => ({
    description,
    ...(etag ? { headers: { ETag: { description: 'revision of what was read; sent back as If-Match', schema: { type: 'string' } } } } : {}),
    content: { 'application/json': {} },
  }),
  file: (type: string) => ({
    description: 'the file; its name stands in Content-Disposition (RFC 6266)',
    headers: { 'Content-Disposition': { schema: { type: 'string' } } },
    content: { [type]: {} },
  }),
  events: { description: 'server-sent events, one JSON document each, for as long as somebody listens (HTML standard, 9.2)', content: { 'text/event-stream': {} } },
}

const refusals = { description: 'a refusal', content: { 'application/problem+json': { schema: { $ref: '#/components/schemas/Problem' } } } }

/** A path as OpenAPI writes it, and the names in it. */
function templated(path: string) {
  const names = [...path.matchAll(/:(\w+)/g)].map((m) => m[1])
  return { path: path.replaceAll(/:(\w+)/g, '{$1}'), names }
}

const header = (name: string, required: boolean, description: string, schema: object) => ({ name, in: 'header', required, description, schema })

function parametersOf(spec: RouteSpec, names: readonly string[]) {
  return [
    ...names.map((name) => ({ name, in: 'path', required: true, schema: { type: 'string' }, ...(name in exampleParams ? { example: exampleParams[name] } : {}) })),
    ...Object.entries(spec.query ?? {}).map(([name, { description, example, required }]) => ({ name, in: 'query', required: required ?? false, description, schema: { type: 'string' }, ...(example === undefined ? {} : { example }) })),
    ...(spec.ifMatch ? [header('If-Match', true, 'the ETag of the state that the act was decided on', { type: 'string', pattern: '^"\\d+"$' })] : []),
    ...(spec.method === 'get' ? [] : [header('Idempotency-Key', false, 'of one intended act, kept when it is sent again: the second time gets the first one’s answer', { type: 'string', pattern: '^[\\w-]{8,80}$' })]),
  ]
}

function requestOf(spec: RouteSpec) {
  if (spec.upload)
    return { required: true, content: { 'multipart/form-data': { schema: { type: 'object', required: [spec.upload.field], properties: { [spec.upload.field]: { type: 'string', contentMediaType: 'application/octet-stream', description: `the file, at most ${spec.upload.limit} bytes` } } } } } }
  if (!spec.body) return undefined
  const example = exampleOf(spec)
  return { required: true, content: { 'application/json': { schema: plain(spec.body), ...(example === undefined ? {} : { example }) } } }
}

const rolesOf = (spec: RouteSpec) => (spec.access === 'signed-in' ? 'Everybody who is signed in, on their own behalf or as far as they may read.' : `Takes the act “${spec.access}”: ${matrix[spec.access].join(', ')}.`)

const operationId = ({ method, path }: Pick<RouteSpec, 'method' | 'path'>) => [method, ...path.split(/[/:.-]+/).filter(Boolean)].join('_')

function operationOf(spec: RouteSpec) {
  const { names } = templated(spec.path)
  const body = requestOf(spec)
  const gives = spec.gives ?? 'application/json'
  return {
    operationId: operationId(spec),
    tags: [tagOf(spec.path)],
    summary: spec.summary,
    description: rolesOf(spec),
    security: [spec.method === 'get' ? { session: [] } : { session: [], token: [] }, ...(spec.benchKey ? [{ benchKey: [] }] : [])],
    parameters: parametersOf(spec, names),
    ...(body ? { requestBody: body } : {}),
    responses: { '2XX': gives === 'application/json' ? answered.json('done; the answer is what it stands at now', spec.ifMatch === true) : gives === 'text/event-stream' ? answered.events : answered.file(gives), default: refusals },
  }
}

/** The document of these routes and of the few that need no session. */
export function openApiDocument(specs: readonly RouteSpec[], { baseUrl }: { baseUrl: string }): OpenApiDocument {
  const paths: Record<string, Record<string, unknown>> = {}
  const put = (path: string, method: string, operation: object) => void ((paths[path] ??= {})[method] = operation)
  for (const open of openPaths)
    put(templated(open.path).path, open.method, {
      operationId: operationId(open), tags: ['people'], summary: open.summary, security: [],
      parameters: templated(open.path).names.map((name) => ({ name, in: 'path', required: true, schema: { type: 'string' } })),
      ...(open.body ? { requestBody: { required: true, content: { 'application/json': { schema: plain(open.body), ...(open.example === undefined ? {} : { example: open.example }) } } } } : {}),
      responses: { '2XX': answered.json('done', false), default: refusals },
    })
  for (const spec of specs) put(templated(spec.path).path, spec.method, operationOf(spec))
  const used = new Set(Object.values(paths).flatMap((item) => Object.values(item).flatMap((o) => (o as { tags: string[] }).tags)))
  return {
    openapi: '3.1.0',
    info: {
      title: 'Detent', version: '1', summary: 'Control parameters of servo boards: keep, check, sign, release.',
      description: 'Bodies are refused when they hold a field that is not in their schema. Acts in a session send X-Detent-Token, which GET /me gives. Values are in the units that the parameter schema states; the model is in SI.',
    },
    servers: [{ url: `${baseUrl}/api` }],
    tags: Object.entries(tagWords).filter(([name]) => used.has(name)).map(([name, description]) => ({ name, description })),
    paths,
    components: {
      schemas: { Problem: problem },
      securitySchemes: {
        session: { type: 'apiKey', in: 'cookie', name: 'detent', description: 'set by POST /session' },
        token: { type: 'apiKey', in: 'header', name: 'X-Detent-Token', description: 'the session’s token, from GET /me' },
        benchKey: { type: 'http', scheme: 'bearer', description: 'a bench key: reads as its builder does, and records flashes' },
      },
      'x-refusals': Object.fromEntries(errorCodes.map((code) => [code, { status: statusOfCode(code), title: titleOfCode(code) }])),
    },
  }
}
