import type { Role } from '../registers/roles.ts'
import { model, type HelpTopic } from './topic.ts'

const timing = model('firmware timing')
const schema = 'the firmware version’s parameter schema'

/** What each role of a parameter does on the board. */
export const roleHelp: Record<Role, HelpTopic> = {
  'position.kp': { title: 'Position gain', text: 'Speed asked for per radian of position error. Higher follows stiffer; too high against the velocity loop inside it, and the joint rings.', formula: 'ω_ref = clamp(K_pp·e_θ + x_p, ±ω_max)', source: timing },
  'position.ki': { title: 'Position integral gain', text: 'Sums the position error until it is gone, against friction and load. It costs phase; 0 leaves the sum out altogether.', formula: 'x_p becomes x_p + K_ip·T_o·e_θ', source: timing },
  'position.min': { title: 'Lower position limit', text: 'Set-points below it are held here. Keep it inside the hard stop: beyond, the joint would push into the stop under full current.', source: schema },
  'position.max': { title: 'Upper position limit', text: 'Set-points above it are held here. Keep it inside the hard stop: beyond, the joint would push into the stop under full current.', source: schema },
  'velocity.kp': { title: 'Velocity gain', text: 'Current asked for per rad/s of speed error. It damps the joint and carries the position loop; window, delays and compliance say how high it may go.', formula: 'i_ref = clamp(K_pv·e_ω + x_v, ±I_max)', source: timing },
  'velocity.ki': { title: 'Velocity integral gain', text: 'Sums the speed error, so that a steady load leaves none. Together with friction and a coarse sensor it can make the joint hunt at rest.', formula: 'x_v becomes x_v + K_iv·T_o·e_ω', source: timing },
  'velocity.window': { title: 'Velocity window', text: 'Samples over which the angle is differenced into a speed. Longer is smoother and later: the estimate lags by half the window.', formula: 'ω_est = (θ_s[k] − θ_s[k−W]) / (W·T_o); lag W·T_o/2', source: timing },
  'current.kp': { title: 'Current gain', text: 'Voltage asked for per ampere of current error. With the winding’s resistance and inductance it sets how fast torque follows; dead time limits it.', formula: 'u = K_pc·e_i + x_c', source: timing },
  'current.ki': { title: 'Current integral gain', text: 'Sums the current error. Chosen so that its zero meets the winding’s own pole, the loop becomes a pure integrator.', formula: 'x_c becomes x_c + K_ic·T_c·e_i; pole met when K_ic = K_pc·(1/a − 1)/T_c, a = e^(−R·T_c/L)', source: `${timing}; closed forms` },
  'current.limit': { title: 'Current limit', text: 'Most current that the velocity law may ask for. It bounds the torque on the gear train and the heat of the winding, and with them what the joint can do to a person.', formula: 'torque at most N·k_t·I_max', source: `${timing}; the gear’s and motor’s data sheets` },
  'current.continuous': { title: 'Continuous current', text: 'Current the joint may hold for good. The winding must settle below its highest temperature at it.', formula: 'T = T_amb + I²·R(T)·R_th', source: model('winding heat') },
  'speed.limit': { title: 'Speed limit', text: 'Fastest speed the position law may ask for. It must be reachable at the lowest supply, and half an encoder turn must not pass within the velocity window.', formula: 'ω_max·W·T_o < π, on the encoder’s own shaft', source: model('firmware timing; aliasing of the window') },
  'acceleration.limit': { title: 'Acceleration limit', text: 'How steeply set-points may rise and fall. It smooths the way to a set-point and is no part of the loop: stability does not see it.', source: schema },
  'rate.current': { title: 'Current task rate', text: 'How often the current law runs. Each run’s voltage takes effect one output delay later.', formula: 'T_c = 1/f_c', source: timing },
  'rate.outer': { title: 'Outer task rate', text: 'How often the position and velocity laws run. Its ratio to the current rate sets the pattern that stability is computed over.', formula: 'f_c/f_o = p/q; the pattern repeats after q·T_o', source: timing },
  'output.delay': { title: 'Output delay', text: 'Current ticks from computing a voltage to applying it: 0, 1 or 2. One is usual: computed in one period, applied in the next.', formula: 'applied voltage = u of D ticks ago', source: timing },
  'duty.limit': { title: 'Duty limit', text: 'Largest share of the supply that the bridge applies. Some headroom keeps the current measurement and the bridge’s charge pump alive.', formula: '|v| at most d_max·V_bus', source: timing },
  'supply.nominal': { title: 'Nominal supply', text: 'Supply that the gains were chosen for. Where the firmware does not compensate, all gains of the current loop scale with the true one.', formula: 'γ = V_bus/V_nom', source: timing },
  'supply.compensated': { title: 'Supply compensation', text: 'Whether the firmware divides by the measured supply. On, the loop gain stays the same from an empty to a full battery.', formula: 'on: γ = 1; off: γ = V_bus/V_nom', source: timing },
  'pwm.frequency': { title: 'PWM frequency', text: 'How often the bridge switches. Ripple current and switching loss hang on it; the model holds the voltage constant between ticks.', source: `${schema}; ${model('sampling')}` },
  'pwm.counts': { title: 'PWM counts', text: 'Steps between no voltage and the whole supply. A step should move the current by less than the current sensor can tell, else the loop hunts between two steps.', formula: 'V_bus/counts/(R + R_on) < i_lsb', source: 'Peterchev & Sanders 2003 (from memory)' },
  'encoder.offset': { title: 'Encoder offset', text: 'Angle the encoder shows where the joint’s zero is. Measured on one board at one joint, and worthless on any other.', source: 'product rule: board-bound values' },
  'encoder.direction': { title: 'Encoder direction', text: 'Which way the encoder counts against the joint. Reversed, the feedback drives the error up instead of down.', source: 'common practice, no source' },
  'motor.direction': { title: 'Motor direction', text: 'Which way positive current turns the joint. Reversed, the feedback drives the error up instead of down.', source: 'common practice, no source' },
  'control.mode': { title: 'Control mode', text: 'Which loops are closed: position closes all three, velocity the inner two, current one.', source: timing },
  'bus.address': { title: 'Bus address', text: 'Seven-bit address that the board answers at. Two boards at one address silence each other; a few addresses are reserved.', formula: '0x08 … 0x77', source: 'NXP UM10204, reserved addresses' },
  'bus.watchdog': { title: 'Bus watchdog', text: 'How long the board waits for the bus before it stops the joint by itself. Off, a broken cable leaves the last set-point standing.', source: 'common practice, no source' },
}
