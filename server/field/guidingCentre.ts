import type { LocalField } from './motion.ts';

/**
 * Relativistic guiding centre in a static field, no electric field: with u∥ = p∥/mc, μ̂ = u⊥²/2B and R = mc/q,
 *   dX/dt = (c/γ) (u∥ B* + R μ̂ b×∇B)/B*∥,  du∥/dt = −(c/γ) μ̂ B*·∇B/B*∥,  B* = B + R u∥ ∇×b,  γ² = 1 + 2μ̂B + u∥².
 * Advanced by the classical Runge-Kutta method of order 4; μ̂ is constant by construction, energy is not and is watched.
 *
 * @source Tao, Chan & Brizard (2007), Phys. Plasmas 14, 092107; Cary & Brizard (2009), Rev. Mod. Phys. 81, 693
 */
export class GuidingCentreStepper {
  /** X in reference radii and u∥: shape (4,). */
  readonly state = new Float64Array(4);
  private readonly field: LocalField;
  private readonly moment: number;
  private readonly rigidity: number;
  private readonly lightRadiiPerS: number;
  private readonly k = new Float64Array(16);
  private readonly trial = new Float64Array(4);

  /**
   * @param moment - μ̂, 1/nT
   * @param rigidity - mc/q with the sign of the charge, nT × radii
   */
  constructor(field: LocalField, moment: number, rigidity: number, lightRadiiPerS: number) {
    this.field = field;
    this.moment = moment;
    this.rigidity = rigidity;
    this.lightRadiiPerS = lightRadiiPerS;
  }

  step(dt: number): void {
    const { state, trial, k } = this;
    this.slope(state, 0);
    for (let stage = 1; stage < 4; stage++) {
      const share = stage === 3 ? dt : 0.5 * dt;
      for (let i = 0; i < 4; i++) trial[i] = state[i] + share * k[4 * (stage - 1) + i];
      this.slope(trial, 4 * stage);
    }
    for (let i = 0; i < 4; i++) state[i] += (dt / 6) * (k[i] + 2 * k[4 + i] + 2 * k[8 + i] + k[12 + i]);
  }

  /** γ at the state, from the field evaluated there. */
  gammaAt(magnitudeNt: number): number {
    return Math.sqrt(1 + 2 * this.moment * magnitudeNt + this.state[3] * this.state[3]);
  }

  private slope(y: Float64Array, slot: number): void {
    const { field, moment, rigidity, k } = this;
    field.at(y[0], y[1], y[2]);
    const { magnitudeNt, unit, gradient, curl } = field;
    const parallel = y[3];
    const gamma = Math.sqrt(1 + 2 * moment * magnitudeNt + parallel * parallel);
    let alongUnit = 0;
    let alongGradient = 0;
    for (let c = 0; c < 3; c++) {
      const star = magnitudeNt * unit[c] + rigidity * parallel * curl[c];
      const cross = unit[(c + 1) % 3] * gradient[(c + 2) % 3] - unit[(c + 2) % 3] * gradient[(c + 1) % 3];
      k[slot + c] = parallel * star + rigidity * moment * cross;
      alongUnit += star * unit[c];
      alongGradient += star * gradient[c];
    }
    const scale = this.lightRadiiPerS / (gamma * alongUnit);
    for (let c = 0; c < 3; c++) k[slot + c] *= scale;
    k[slot + 3] = -scale * moment * alongGradient;
  }
}
