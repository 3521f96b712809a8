/** Gives out identifiers for a language: made from a name, each once, a number after it where two names would meet. */
export class Identifiers {
  private readonly taken = new Set<string>()

  take(wanted: string): string {
    let name = wanted
    for (let k = 2; this.taken.has(name); k += 1) name = `${wanted}_${k}`
    this.taken.add(name)
    return name
  }
}

/** `velocityGain` → `VELOCITY_GAIN`; ASCII only. */
export const upperSnake = (name: string): string =>
  name.replace(/([a-z0-9])([A-Z])/g, '$1_$2').replace(/[^A-Za-z0-9]+/g, '_').replace(/^_+|_+$/g, '').toUpperCase() || 'X'
