import type { FieldModel } from './types.ts';

/**
 * Relativistic Boris push in a static magnetic field: half a drift, a rotation of u = p/mc about B, half a drift. Second
 * order in the step, and |u| is kept to round-off because without an electric field the kick is a pure rotation.
 *
 * @source Boris (1970), Proc. 4th Conf. Numerical Simulation of Plasmas, 3; Birdsall & Langdon (1985), section 15-4
 */
export class BorisStepper {
  /** Reference radii. */
  readonly position = new Float64Array(3);
  /** p/mc. */
  readonly momentum = new Float64Array(3);
  /** Field at the middle of the last step, nT. */
  readonly field = new Float64Array(3);
  private readonly model: FieldModel;
  private readonly rigidity: number;
  private readonly lightRadiiPerS: number;

  /** @param rigidity - mc/q with the sign of the charge, nT × radii */
  constructor(model: FieldModel, rigidity: number, lightRadiiPerS: number) {
    this.model = model;
    this.rigidity = rigidity;
    this.lightRadiiPerS = lightRadiiPerS;
  }

  step(dt: number): void {
    const { position, momentum, field } = this;
    let ux = momentum[0];
    let uy = momentum[1];
    let uz = momentum[2];
    const perGamma = this.lightRadiiPerS / Math.sqrt(1 + ux * ux + uy * uy + uz * uz);
    const half = 0.5 * dt * perGamma;
    position[0] += half * ux;
    position[1] += half * uy;
    position[2] += half * uz;
    this.model.fieldInto(position[0], position[1], position[2], field);
    const turn = half / this.rigidity;
    const tx = turn * field[0];
    const ty = turn * field[1];
    const tz = turn * field[2];
    const scale = 2 / (1 + tx * tx + ty * ty + tz * tz);
    const px = ux + uy * tz - uz * ty;
    const py = uy + uz * tx - ux * tz;
    const pz = uz + ux * ty - uy * tx;
    ux += scale * (py * tz - pz * ty);
    uy += scale * (pz * tx - px * tz);
    uz += scale * (px * ty - py * tx);
    momentum[0] = ux;
    momentum[1] = uy;
    momentum[2] = uz;
    position[0] += half * ux;
    position[1] += half * uy;
    position[2] += half * uz;
  }
}
