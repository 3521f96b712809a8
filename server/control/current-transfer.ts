import { complexMatrix, solveComplex, type ComplexMatrix } from './complex-matrix.ts'
import type { SampledJoint } from './sampled-joint.ts'

/** The current loop in the frequency domain: scalar, one rate. */
export class CurrentTransfer {
  /** Loop broken at the request u, at the frequency last evaluated. */
  L_re = 0
  L_im = 0
  private readonly joint: SampledJoint
  private readonly resolvent: ComplexMatrix
  private readonly drive: ComplexMatrix
  private readonly det = { re: 0, im: 0 }

  constructor(joint: SampledJoint) {
    this.joint = joint
    this.resolvent = complexMatrix(joint.nx)
    this.drive = complexMatrix(joint.nx, 1)
  }

  /** Evaluates L at e^{jθ}, θ in radians per current tick. */
  at(theta: number): void {
    const { nx, Ad, Bd, gamma, timing, model } = this.joint
    const { D, K_pc, K_ic } = model.firmware
    const { resolvent, drive } = this
    const zr = Math.cos(theta)
    const zi = Math.sin(theta)
    for (let i = 0; i < nx; i++) {
      for (let j = 0; j < nx; j++) {
        resolvent.re[i * nx + j] = -Ad[i * nx + j]
        resolvent.im[i * nx + j] = 0
      }
      resolvent.re[i * nx + i] += zr
      resolvent.im[i * nx + i] += zi
      drive.re[i] = Bd[i]
      drive.im[i] = 0
    }
    solveComplex(resolvent, drive, 1, this.det)
    const s = Math.sin(theta / 2)
    const dr = 2 * s * s
    const di = Math.sin(theta)
    const size = dr * dr + di * di
    const cr = K_pc + (K_ic === 0 ? 0 : (K_ic * timing.T_c * dr) / size)
    const ci = K_ic === 0 ? 0 : (-K_ic * timing.T_c * di) / size
    const gr = gamma * (drive.re[0] * cr - drive.im[0] * ci)
    const gi = gamma * (drive.re[0] * ci + drive.im[0] * cr)
    const turn = -D * theta
    const tr = Math.cos(turn)
    const ti = Math.sin(turn)
    this.L_re = gr * tr - gi * ti
    this.L_im = gr * ti + gi * tr
  }

  /** L and T = L/(1 + L) at the frequency last evaluated. */
  fundamental(out: { L_re: number; L_im: number; T_re: number; T_im: number }): void {
    const { L_re, L_im } = this
    const a = 1 + L_re
    const d = a * a + L_im * L_im
    out.L_re = L_re
    out.L_im = L_im
    out.T_re = (L_re * a + L_im * L_im) / d
    out.T_im = (L_im * a - L_re * L_im) / d
  }
}
