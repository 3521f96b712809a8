/**
 * Whether a document has the form of OpenAPI 3.1, as far as Detent's uses it.
 *
 * Source: OpenAPI Specification 3.1.0 (as Debian's package openapi-specification 3.1.0-1 ships it), the tables of fixed fields:
 * OpenAPI Object, Info, Server, Paths, Path Item, Operation, Parameter, Request Body, Media Type, Responses, Response, Header, Components,
 * Security Scheme, Tag. Fields are closed but for those that begin with x- ("Specification Extensions").
 */
const extensions = { '^x-': {} }
const object = (properties: Record<string, object>, required: string[] = []) => ({ type: 'object', properties, required, patternProperties: extensions, additionalProperties: false })
const map = (of: object) => ({ type: 'object', additionalProperties: of })
const text = { type: 'string' }
const ref = (name: string) => ({ $ref: `#/$defs/${name}` })
/** JSON Schema 2020-12: an object or a truth value; its own form is checked by the schema's meta-schema. */
const schema = { type: ['object', 'boolean'] }

export const openApiForm = {
  $schema: 'https://json-schema.org/draft/2020-12/schema',
  ...object({ openapi: { type: 'string', pattern: '^3\\.1\\.\\d+(-.+)?$' }, info: ref('info'), jsonSchemaDialect: text, servers: { type: 'array', items: ref('server') }, paths: ref('paths'), webhooks: { type: 'object' }, components: ref('components'), security: { type: 'array', items: map({ type: 'array', items: text }) }, tags: { type: 'array', items: ref('tag') }, externalDocs: { type: 'object' } }, ['openapi', 'info']),
  // "The OpenAPI document MUST contain at least one paths field, a components field or a webhooks field."
  anyOf: [{ required: ['paths'] }, { required: ['components'] }, { required: ['webhooks'] }],
  $defs: {
    info: object({ title: text, summary: text, description: text, termsOfService: text, contact: { type: 'object' }, license: { type: 'object' }, version: text }, ['title', 'version']),
    server: object({ url: text, description: text, variables: { type: 'object' } }, ['url']),
    tag: object({ name: text, description: text, externalDocs: { type: 'object' } }, ['name']),
    paths: { type: 'object', patternProperties: { '^/': ref('pathItem'), ...extensions }, additionalProperties: false },
    pathItem: object({ summary: text, description: text, ...Object.fromEntries(['get', 'put', 'post', 'delete', 'options', 'head', 'patch', 'trace'].map((m) => [m, ref('operation')])), servers: { type: 'array' }, parameters: { type: 'array', items: ref('parameter') } }),
    operation: object({ tags: { type: 'array', items: text }, summary: text, description: text, externalDocs: { type: 'object' }, operationId: text, parameters: { type: 'array', items: ref('parameter'), uniqueItems: true }, requestBody: ref('requestBody'), responses: ref('responses'), deprecated: { type: 'boolean' }, security: { type: 'array', items: map({ type: 'array', items: text }) } }),
    parameter: {
      ...object({ name: text, in: { enum: ['query', 'header', 'path', 'cookie'] }, description: text, required: { type: 'boolean' }, deprecated: { type: 'boolean' }, schema, example: {}, content: { type: 'object' }, style: text, explode: { type: 'boolean' } }, ['name', 'in']),
      // "If the parameter location is "path", this property is REQUIRED and its value MUST be true."
      if: { properties: { in: { const: 'path' } } }, then: { properties: { required: { const: true } }, required: ['required'] },
      // "A parameter MUST contain either a schema property, or a content property, but not both."
      oneOf: [{ required: ['schema'] }, { required: ['content'] }],
    },
    requestBody: object({ description: text, content: ref('content'), required: { type: 'boolean' } }, ['content']),
    content: map(object({ schema, example: {}, examples: { type: 'object' }, encoding: { type: 'object' } })),
    // "The Responses Object MUST contain at least one response code"; X stands for any digit
    responses: { type: 'object', minProperties: 1, properties: { default: ref('response') }, patternProperties: { '^[1-5](\\d\\d|XX)$': ref('response'), ...extensions }, additionalProperties: false },
    response: object({ description: text, headers: map(object({ description: text, required: { type: 'boolean' }, schema, example: {} })), content: ref('content'), links: { type: 'object' } }, ['description']),
    components: object({ schemas: map(schema), securitySchemes: map(ref('securityScheme')), ...Object.fromEntries(['responses', 'parameters', 'examples', 'requestBodies', 'headers', 'links', 'callbacks', 'pathItems'].map((n) => [n, { type: 'object' }])) }),
    securityScheme: {
      ...object({ type: { enum: ['apiKey', 'http', 'mutualTLS', 'oauth2', 'openIdConnect'] }, description: text, name: text, in: { enum: ['query', 'header', 'cookie'] }, scheme: text, bearerFormat: text }, ['type']),
      allOf: [{ if: { properties: { type: { const: 'apiKey' } } }, then: { required: ['name', 'in'] } }, { if: { properties: { type: { const: 'http' } } }, then: { required: ['scheme'] } }],
    },
  },
}
