/** A parameter schema with one of each kind: gains, a mode, an address, a board-bound value, telemetry, a constant, a command. Byte orders and places chosen to be easy to read in hex. */
export const smallSchema = {
  title: 'small',
  type: 'object',
  'x-image': { length: 32, fill: 0, release: { address: 28, encoding: 'u32' } },
  properties: {
    busAddress: { title: 'Bus address', type: 'integer', minimum: 8, maximum: 119, default: 64, 'x-role': 'bus.address', 'x-register': { address: 0, encoding: 'u8' } },
    controlMode: { title: 'Control mode', enum: ['position', 'velocity'], default: 'position', 'x-role': 'control.mode', 'x-register': { address: 1, encoding: 'u8', values: { position: 0, velocity: 1 } } },
    velocityGain: { title: 'Velocity gain', description: 'Proportional gain of the velocity loop.', type: 'number', minimum: 0, maximum: 8, default: 0.25, 'x-unit': 'A·s/rad', 'x-role': 'velocity.kp', 'x-register': { address: 4, encoding: 'q7.24' } },
    currentLimit: { title: 'Current limit', type: 'number', minimum: 0, maximum: 6, default: 2, 'x-unit': 'A', 'x-role': 'current.limit', 'x-register': { address: 8, encoding: 'u16', scale: 0.001 } },
    encoderOffset: { title: 'Encoder offset', type: 'number', default: 0, 'x-unit': 'rad', 'x-role': 'encoder.offset', 'x-bound': 'board', 'x-register': { address: 12, encoding: 'f32' } },
    boardTemperature: { title: 'Board temperature', type: 'integer', 'x-unit': 'K', 'x-register': { address: 16, encoding: 'u16', access: 'ro' } },
    storeCommand: { title: 'Store', enum: ['none', 'store'], default: 'store', 'x-register': { address: 20, encoding: 'u8', access: 'wo', values: { none: 0, store: 90 } } },
    outerRate: { title: 'Outer rate', type: 'number', const: 1000, 'x-unit': 'Hz', 'x-role': 'rate.outer' },
  },
}

export const smallSchemaText = JSON.stringify(smallSchema, null, 2)
