import type { FieldFunction } from './sphericalHarmonic.ts';

/**
 * Follows a field line by arc length, dX/ds = ± B/|B|, with the embedded 5(4) pair of Dormand & Prince (1980) and its
 * continuous extension of order 4, so that every later question (mirror point, B_min, integrals) is answered on the same
 * piecewise polynomial. Lengths in reference radii.
 *
 * @source Dormand & Prince (1980), J. Comp. Appl. Math. 6, 19; Hairer, Nørsett & Wanner (1993), Solving ODEs I, II.5-II.6
 */
export type LineEnd = 'mirror' | 'sphere' | 'open' | 'singular' | 'length';

const MAX_STEPS = 4000;
/** Doubles per stored step: start s, length h, and five vectors of the continuous extension. */
const STRIDE = 17;
/** Inside this radius the multipoles blow up and no line of interest goes there. */
const SINGULAR_RADIUS = 0.05;

/** One traced half-line. Reused: `trace` overwrites it. */
export class FieldLine {
  /** Number of steps, and arc length at the end. */
  count = 0;
  lengthRadii = 0;
  end: LineEnd = 'length';
  /** |B| at the start of each step and at the very end, nT: shape (count + 1,). */
  readonly bNt = new Float64Array(MAX_STEPS + 1);
  private readonly steps = new Float64Array(MAX_STEPS * STRIDE);
  private readonly k = new Float64Array(21);
  private readonly b = new Float64Array(3);
  private readonly point = new Float64Array(3);
  private readonly field: FieldFunction;
  private cursor = 0;

  constructor(field: FieldFunction) {
    this.field = field;
  }

  /** Arc length at the start of step i. */
  stepStart(i: number): number {
    return i < this.count ? this.steps[i * STRIDE] : this.lengthRadii;
  }

  /**
   * Follows the line until |B| first rises through `mirrorNt`, or it leaves the shell of radii, or it is too long.
   *
   * @param direction - +1 along B, −1 against it
   * @param mirrorNt - nT; Infinity to go on to the sphere
   * @param innerRadius - stops where r falls below it (reference radii); 0 for never
   * @param outerRadius - the line counts as open beyond it
   * @param tolerance - local error of position, reference radii
   */
  trace(
    x0: number,
    y0: number,
    z0: number,
    direction: 1 | -1,
    mirrorNt: number,
    innerRadius: number,
    outerRadius: number,
    tolerance: number,
  ): LineEnd {
    const { k, steps, bNt } = this;
    let x = x0;
    let y = y0;
    let z = z0;
    let s = 0;
    let h = 0.02 * Math.max(0.2, Math.hypot(x, y, z));
    this.count = 0;
    this.lengthRadii = 0;
    bNt[0] = this.slope(x, y, z, direction, 0);

    for (let attempt = 0; attempt < 4 * MAX_STEPS; attempt++) {
      if (this.count >= MAX_STEPS) return this.finish('length', s);
      this.slope(x + h * 0.2 * k[0], y + h * 0.2 * k[1], z + h * 0.2 * k[2], direction, 3);
      this.stage(x, y, z, h, direction, 6, 3 / 40, 9 / 40, 0, 0, 0);
      this.stage(x, y, z, h, direction, 9, 44 / 45, -56 / 15, 32 / 9, 0, 0);
      this.stage(x, y, z, h, direction, 12, 19372 / 6561, -25360 / 2187, 64448 / 6561, -212 / 729, 0);
      this.stage(x, y, z, h, direction, 15, 9017 / 3168, -355 / 33, 46732 / 5247, 49 / 176, -5103 / 18656);
      const nx =
        x +
        h * ((35 / 384) * k[0] + (500 / 1113) * k[6] + (125 / 192) * k[9] - (2187 / 6784) * k[12] + (11 / 84) * k[15]);
      const ny =
        y +
        h * ((35 / 384) * k[1] + (500 / 1113) * k[7] + (125 / 192) * k[10] - (2187 / 6784) * k[13] + (11 / 84) * k[16]);
      const nz =
        z +
        h * ((35 / 384) * k[2] + (500 / 1113) * k[8] + (125 / 192) * k[11] - (2187 / 6784) * k[14] + (11 / 84) * k[17]);
      const nextMagnitude = this.slope(nx, ny, nz, direction, 18);
      let error = 0;
      for (let c = 0; c < 3; c++) {
        const e =
          h *
          ((71 / 57600) * k[c] -
            (71 / 16695) * k[6 + c] +
            (71 / 1920) * k[9 + c] -
            (17253 / 339200) * k[12 + c] +
            (22 / 525) * k[15 + c] -
            (1 / 40) * k[18 + c]);
        error += e * e;
      }
      const ratio = Math.sqrt(error) / tolerance;
      if (!(ratio <= 1)) {
        h *= Number.isFinite(ratio) ? Math.max(0.2, 0.9 * ratio ** -0.2) : 0.2;
        if (h < 1e-9) return this.finish('singular', s);
        continue;
      }
      const at = this.count * STRIDE;
      steps[at] = s;
      steps[at + 1] = h;
      for (let c = 0; c < 3; c++) {
        const start = c === 0 ? x : c === 1 ? y : z;
        const stop = c === 0 ? nx : c === 1 ? ny : nz;
        const difference = stop - start;
        const bulge = h * k[c] - difference;
        steps[at + 2 + c] = start;
        steps[at + 5 + c] = difference;
        steps[at + 8 + c] = bulge;
        steps[at + 11 + c] = difference - h * k[18 + c] - bulge;
        steps[at + 14 + c] =
          h *
          ((-12715105075 / 11282082432) * k[c] +
            (87487479700 / 32700410799) * k[6 + c] -
            (10690763975 / 1880347072) * k[9 + c] +
            (701980252875 / 199316789632) * k[12 + c] -
            (1453857185 / 822651844) * k[15 + c] +
            (69997945 / 29380423) * k[18 + c]);
      }
      this.count += 1;
      s += h;
      x = nx;
      y = ny;
      z = nz;
      bNt[this.count] = nextMagnitude;
      this.lengthRadii = s;
      if (nextMagnitude > mirrorNt) return this.finish('mirror', s);
      const r2 = x * x + y * y + z * z;
      if (r2 > outerRadius * outerRadius) return this.finish('open', s);
      if (r2 < innerRadius * innerRadius) return this.finish('sphere', s);
      if (r2 < SINGULAR_RADIUS * SINGULAR_RADIUS) return this.finish('singular', s);
      k.copyWithin(0, 18, 21);
      h *= Math.min(3, 0.9 * Math.max(ratio, 1e-6) ** -0.2);
      // Longer steps could jump over a local maximum of |B|.
      h = Math.min(h, 0.35 * Math.sqrt(r2));
    }
    return this.finish('length', s);
  }

  /** Point at arc length s, shape (3,), reference radii; returns |B| there, nT. */
  evaluateInto(s: number, out: Float64Array): number {
    this.positionInto(s, out);
    this.field(out[0], out[1], out[2], this.b);
    return Math.hypot(this.b[0], this.b[1], this.b[2]);
  }

  positionInto(s: number, out: Float64Array): Float64Array {
    const { steps } = this;
    // Callers walk along the line, so the step found last is nearly always the right one or its neighbour.
    let step = Math.min(this.cursor, this.count - 1);
    while (step > 0 && steps[step * STRIDE] > s) step -= 1;
    while (step < this.count - 1 && steps[(step + 1) * STRIDE] <= s) step += 1;
    this.cursor = step;
    const at = step * STRIDE;
    const t = (s - steps[at]) / steps[at + 1];
    const u = 1 - t;
    for (let c = 0; c < 3; c++) {
      out[c] =
        steps[at + 2 + c] +
        t * (steps[at + 5 + c] + u * (steps[at + 8 + c] + t * (steps[at + 11 + c] + u * steps[at + 14 + c])));
    }
    return out;
  }

  /** |B| at arc length s, nT. */
  magnitudeAt(s: number): number {
    return this.evaluateInto(s, this.point);
  }

  private finish(end: LineEnd, s: number): LineEnd {
    this.end = end;
    this.lengthRadii = s;
    return end;
  }

  private stage(
    x: number,
    y: number,
    z: number,
    h: number,
    direction: number,
    slot: number,
    a1: number,
    a2: number,
    a3: number,
    a4: number,
    a5: number,
  ): void {
    const { k } = this;
    this.slope(
      x + h * (a1 * k[0] + a2 * k[3] + a3 * k[6] + a4 * k[9] + a5 * k[12]),
      y + h * (a1 * k[1] + a2 * k[4] + a3 * k[7] + a4 * k[10] + a5 * k[13]),
      z + h * (a1 * k[2] + a2 * k[5] + a3 * k[8] + a4 * k[11] + a5 * k[14]),
      direction,
      slot,
    );
  }

  /** Unit vector along the line into k[slot..slot+2]; returns |B|. */
  private slope(x: number, y: number, z: number, direction: number, slot: number): number {
    const { b, k } = this;
    this.field(x, y, z, b);
    const magnitude = Math.sqrt(b[0] * b[0] + b[1] * b[1] + b[2] * b[2]);
    const scale = direction / magnitude;
    k[slot] = b[0] * scale;
    k[slot + 1] = b[1] * scale;
    k[slot + 2] = b[2] * scale;
    return magnitude;
  }
}
