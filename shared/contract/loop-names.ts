/** The loops of a cascade, innermost first. Apart from the schemas, so that a page that only shows figures loads none. */
export const loopNames = ['current', 'velocity', 'position'] as const
export type LoopName = (typeof loopNames)[number]
