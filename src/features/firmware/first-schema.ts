/** What a line's first version begins with: a small map that can be read at once, to be written over. */
export const firstSchema = (title: string) => `${JSON.stringify(
  {
    $schema: 'https://detent.example/schemas/parameter-schema.json',
    title,
    type: 'object',
    'x-image': { length: 32, release: { address: 28, encoding: 'u32' } },
    properties: {
      busAddress: { title: 'Bus address', type: 'integer', minimum: 8, maximum: 119, default: 64, 'x-role': 'bus.address', 'x-register': { address: 0, encoding: 'u8' } },
      controlMode: { title: 'Control mode', enum: ['position', 'velocity', 'current'], default: 'position', 'x-role': 'control.mode', 'x-register': { address: 1, encoding: 'u8', values: { position: 0, velocity: 1, current: 2 } } },
    },
  },
  null,
  2,
)}\n`
