/** Lets other requests have their turn between two pieces of long work. */
export const breathe = (): Promise<void> => new Promise((done) => setImmediate(done))
