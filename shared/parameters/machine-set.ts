import { Type, type Static, type TSchema } from '@sinclair/typebox'

/**
 * The machine set: everything Detent controls about one machine, as one plain document.
 *
 * A release freezes one, a change drafts the next one, the text view shows one, and the command line reads one.
 * SI units throughout, with the letters of server/control/MODEL.md.
 */

const strict = { additionalProperties: false }
const described = (description: string) => ({ description })

/** A key: what joints, families, buses and machines are called in addresses and documents. */
export const Key = Type.String({ pattern: '^[a-z0-9](?:[a-z0-9-]{0,38}[a-z0-9])?$', maxLength: 40, description: 'lower-case letters, digits and hyphens' })

/** A value of a parameter: a number, a truth value, or text (an enum's key, or a decimal that a double does not hold). */
export const Value = Type.Union([Type.Number(), Type.Boolean(), Type.String({ maxLength: 80 })])
export type Value = Static<typeof Value>

export const Values = Type.Record(Type.String({ pattern: '^[A-Za-z_][A-Za-z0-9_-]{0,63}$' }), Value, { additionalProperties: false })
export type Values = Static<typeof Values>

const positive = (description: string) => Type.Number({ exclusiveMinimum: 0, description })
const atLeastZero = (description: string) => Type.Number({ minimum: 0, description })

/** A physical quantity: its nominal value alone, or with the bounds that the tolerance sweep walks. */
const quantity = <T extends TSchema>(number: T, description: string) =>
  Type.Union([number, Type.Object({ value: number, low: number, high: number }, strict)], { description })

export const DriveTrain = Type.Object(
  {
    V_nom: positive('nominal supply, V'),
    V_bus: Type.Optional(quantity(positive('V'), 'supply as it stands and its range, V; V_nom when absent')),
    R: quantity(positive('Ω'), 'winding resistance at 25 °C, Ω'),
    R_on: Type.Optional(quantity(atLeastZero('Ω'), 'driver and lead resistance, Ω')),
    L: quantity(positive('H'), 'winding inductance, H'),
    k_t: quantity(positive('N·m/A'), 'torque constant, N·m/A; k_e equals it unless given'),
    k_e: Type.Optional(quantity(atLeastZero('V·s/rad'), 'back-EMF constant, V·s/rad')),
    N: positive('motor revolutions per output revolution'),
    eta: quantity(Type.Number({ exclusiveMinimum: 0, maximum: 1 }), 'gear efficiency, driving'),
    J_rotor: quantity(positive('kg·m²'), 'rotor inertia, kg·m²'),
    J_load: quantity(positive('kg·m²'), 'load inertia at the output, kg·m²'),
    b_rotor: Type.Optional(quantity(atLeastZero('N·m·s/rad'), 'rotor drag, N·m·s/rad')),
    b_load: Type.Optional(quantity(atLeastZero('N·m·s/rad'), 'output drag, N·m·s/rad')),
    k_s: Type.Optional(quantity(positive('N·m/rad'), 'torsional stiffness at the output, N·m/rad; rigid when absent')),
    d_s: Type.Optional(quantity(atLeastZero('N·m·s/rad'), 'torsional damping, N·m·s/rad')),
    backlash: Type.Optional(atLeastZero('backlash at the output, rad')),
    tau_c: Type.Optional(atLeastZero('Coulomb friction at the output, N·m')),
    tau_s: Type.Optional(atLeastZero('breakaway friction at the output, N·m; τ_c when absent')),
    encoder: Type.Union([Type.Literal('output'), Type.Literal('motor')], described('side of the gear the encoder sits on')),
    bits: Type.Integer({ minimum: 1, maximum: 32, description: 'encoder resolution, bits a turn' }),
    sensor_delay: Type.Optional(Type.Integer({ minimum: 0, maximum: 64, description: 'age of the angle, current ticks' })),
    i_lsb: positive('current sensor step, A'),
    T_winding: Type.Optional(quantity(Type.Number({ minimum: -60, maximum: 250 }), 'winding temperature and its range, °C; 25 when absent')),
    I_driver: Type.Optional(positive('peak rating of the driver, A')),
    I_sense: Type.Optional(positive('range of the current sensor, A')),
    I_demagnetisation: Type.Optional(positive('current at which the magnets suffer, A')),
    tau_gear: Type.Optional(positive('gear rating at the output, N·m')),
    R_th: Type.Optional(positive('winding to ambient, K/W')),
    tau_th: Type.Optional(positive('thermal time constant (housing), s')),
    R_th_winding: Type.Optional(positive('winding to housing, K/W')),
    tau_th_winding: Type.Optional(positive('winding time constant, s')),
    T_max: Type.Optional(Type.Number({ minimum: 0, maximum: 250, description: 'highest winding temperature, °C' })),
    T_amb: Type.Optional(Type.Number({ minimum: -60, maximum: 120, description: 'ambient temperature, °C; 25 when absent' })),
    peak_duty: Type.Optional(positive('how long the peak current must last from ambient, s')),
    C_bus: Type.Optional(positive('capacitance of the supply, F')),
    V_bus_max: Type.Optional(positive('highest supply the driver bears, V')),
    source_resistance: Type.Optional(atLeastZero('source resistance of the supply, Ω')),
    theta_stop_min: Type.Optional(Type.Number({ description: 'lower hard stop, rad' })),
    theta_stop_max: Type.Optional(Type.Number({ description: 'upper hard stop, rad' })),
    settling_target: Type.Optional(positive('settling wanted of a step, s')),
    step: Type.Optional(positive('step the check commands: rad, rad/s or A by mode')),
  },
  { ...strict, description: 'the physical model of motor, gear, load, sensor and driver; SI units' },
)
export type DriveTrain = Static<typeof DriveTrain>

export const OtherDevice = Type.Object({ address: Type.Integer({ minimum: 0, maximum: 127 }), name: Type.String({ minLength: 1, maxLength: 80 }) }, strict)

export const BusSettings = Type.Object(
  {
    name: Type.String({ minLength: 1, maxLength: 80 }),
    bitRate: Type.Number({ minimum: 1000, maximum: 3_400_000, description: 'bit/s' }),
    supply: positive('V_DD of the bus, V'),
    pullUp: positive('pull-up resistance, Ω'),
    capacitance: positive('bus capacitance, F'),
    pollingRate: Type.Optional(atLeastZero('reads of each board a second, Hz')),
    bytesPerTransaction: Type.Optional(Type.Integer({ minimum: 1, maximum: 4096, description: 'data bytes of a poll' })),
    otherDevices: Type.Optional(Type.Array(OtherDevice, { maxItems: 112 })),
  },
  strict,
)
export type BusSettings = Static<typeof BusSettings>

export const FamilySettings = Type.Object({ name: Type.String({ minLength: 1, maxLength: 80 }), driveTrain: DriveTrain, values: Values }, strict)
export type FamilySettings = Static<typeof FamilySettings>

export const FirmwareName = Type.String({ pattern: '^[a-z0-9][a-z0-9-]{0,38} \\d+\\.\\d+\\.\\d+(?:-[0-9A-Za-z.-]+)?$', maxLength: 80, description: 'firmware line and version, such as "hinge 2.1.0"' })

export const JointSettings = Type.Object(
  {
    name: Type.String({ minLength: 1, maxLength: 80 }),
    family: Key,
    bus: Key,
    address: Type.Integer({ minimum: 0, maximum: 127, description: '7-bit bus address' }),
    firmware: FirmwareName,
    board: Type.Optional(Type.String({ pattern: '^[A-Za-z0-9][A-Za-z0-9._-]{0,39}$', description: 'serial number of the board its board-bound values were measured on' })),
    values: Values,
  },
  strict,
)
export type JointSettings = Static<typeof JointSettings>

export const MachineSet = Type.Object(
  {
    buses: Type.Record(Key, BusSettings, { additionalProperties: false, maxProperties: 64 }),
    families: Type.Record(Key, FamilySettings, { additionalProperties: false, maxProperties: 200 }),
    joints: Type.Record(Key, JointSettings, { additionalProperties: false, maxProperties: 1000 }),
  },
  strict,
)
export type MachineSet = Static<typeof MachineSet>

export const emptySet = (): MachineSet => ({ buses: {}, families: {}, joints: {} })
