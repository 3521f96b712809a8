// Import directions (DEVELOPERS.md, "Directions"). Zones come from listing the folders, so a new feature or module is guarded from its first day.
const fs = require('node:fs')
const folders = (path) => (fs.existsSync(path) ? fs.readdirSync(path, { withFileTypes: true }).filter((d) => d.isDirectory()).map((d) => d.name) : [])
const forbid = (name, comment, from, to) => ({ name, comment, severity: 'error', from, to })

module.exports = {
  forbidden: [
    forbid('no-cycles', 'Every import goes one way.', {}, { circular: true }),
    forbid('client-server-apart', 'Client and server meet in shared only.', { path: '^src/' }, { path: '^server/' }),
    forbid('server-client-apart', 'Client and server meet in shared only.', { path: '^server/' }, { path: '^src/' }),
    forbid('shared-alone', 'shared imports neither side.', { path: '^shared/' }, { path: '^(src|server)/' }),
    forbid('app-on-top', 'Only app imports app and routes.', { path: '^src/(features|components|lib)/' }, { path: '^src/(app/(?!paths)|routes/)' }),
    forbid('features-below-routes', 'Components and lib know no feature.', { path: '^src/(components|lib)/' }, { path: '^src/features/' }),
    ...folders('src/features').map((f) =>
      forbid(`feature-${f}-alone`, 'Features never import each other; routes compose them.', { path: `^src/features/${f}/` }, { path: '^src/features/', pathNot: `^src/features/${f}/` })),
    forbid('pure-core', 'control, exports and shared know no database, web framework, files, clock or randomness.', { path: '^(server/(control|exports)|shared)/' }, { path: '^server/(db|http|modules|jobs)/|node_modules/(express|@mikro-orm|passport)|^(fs|node:fs|http|node:http)$' }),
    forbid('below-modules', 'db and http know no module but what routes hand them.', { path: '^server/(db|http|jobs)/', pathNot: '^server/db/(entities|migrations)' }, { path: '^server/modules/.*/(routes)\\.ts$' }),
    ...folders('server/modules').map((m) =>
      forbid(`module-${m}-routes`, "A module calls another's acts and relates to its entities, never its routes.", { path: `^server/modules/`, pathNot: `^server/modules/${m}/` }, { path: `^server/modules/${m}/routes\\.ts$` })),
    forbid('diverse-decoder', 'The second decoder shares no code with the encoder.', { path: '^server/exports/verify/' }, { path: '^(shared/registers|server/exports/(?!verify))' }),
  ],
  options: { tsPreCompilationDeps: true, tsConfig: { fileName: 'tsconfig.json' }, doNotFollow: { path: 'node_modules' }, exclude: { path: '^(\\.build|\\.data)/' } },
}
