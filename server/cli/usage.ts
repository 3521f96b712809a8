/** A command was called in a way it does not take; the usage follows the message. */
export class Usage extends Error {}
