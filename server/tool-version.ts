import about from '../package.json' with { type: 'json' }

/** Version of Detent itself: named in every check and every file it makes. */
export const TOOL_VERSION: string = about.version
