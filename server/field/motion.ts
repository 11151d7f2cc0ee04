import { eccentricCentre } from './eccentricCentre.ts';
import type { FieldModel } from './types.ts';

/** Local field at a guiding centre: |B|, its unit vector and derivatives by central differences. Reused. */
export class LocalField {
  magnitudeNt = 0;
  readonly unit = new Float64Array(3);
  /** ∇|B|, nT per radius, and ∇×b, per radius. */
  readonly gradient = new Float64Array(3);
  readonly curl = new Float64Array(3);
  private readonly model: FieldModel;
  private readonly b = new Float64Array(3);
  /** ∂b_c/∂x_axis at 3·axis + c. */
  private readonly jacobian = new Float64Array(9);

  constructor(model: FieldModel) {
    this.model = model;
  }

  at(x: number, y: number, z: number): void {
    const { unit, jacobian, gradient, curl, b } = this;
    const h = 2e-5 * Math.sqrt(x * x + y * y + z * z);
    for (let axis = 0; axis < 3; axis++) {
      const dx = axis === 0 ? h : 0;
      const dy = axis === 1 ? h : 0;
      const dz = axis === 2 ? h : 0;
      const plus = this.unitAt(x + dx, y + dy, z + dz);
      for (let c = 0; c < 3; c++) jacobian[3 * axis + c] = b[c];
      const minus = this.unitAt(x - dx, y - dy, z - dz);
      for (let c = 0; c < 3; c++) jacobian[3 * axis + c] = (jacobian[3 * axis + c] - b[c]) / (2 * h);
      gradient[axis] = (plus - minus) / (2 * h);
    }
    this.magnitudeNt = this.unitAt(x, y, z);
    unit.set(b);
    curl[0] = jacobian[5] - jacobian[7];
    curl[1] = jacobian[6] - jacobian[2];
    curl[2] = jacobian[1] - jacobian[3];
  }

  /** d|B|/ds along B, nT per radius. */
  slope(): number {
    return this.unit[0] * this.gradient[0] + this.unit[1] * this.gradient[1] + this.unit[2] * this.gradient[2];
  }

  /** Curvature of the field line, per radius: |(b·∇)b|. */
  curvature(): number {
    const { unit, jacobian } = this;
    let square = 0;
    for (let c = 0; c < 3; c++) {
      square += (unit[0] * jacobian[c] + unit[1] * jacobian[3 + c] + unit[2] * jacobian[6 + c]) ** 2;
    }
    return Math.sqrt(square);
  }

  private unitAt(x: number, y: number, z: number): number {
    const b = this.model.fieldInto(x, y, z, this.b);
    const magnitude = Math.sqrt(b[0] * b[0] + b[1] * b[1] + b[2] * b[2]);
    b[0] /= magnitude;
    b[1] /= magnitude;
    b[2] /= magnitude;
    return magnitude;
  }
}

/** What the record of a motion says when it is over. */
export interface MotionRecord {
  readonly bounces: number;
  /** Means over the record, s; NaN where it is too short. */
  readonly bouncePeriodS: number;
  readonly driftPeriodS: number;
  /** Angle drifted since the first reading, radian, positive anticlockwise about the dipole axis. */
  readonly driftAngleRad: number;
  /** Standard deviation over mean of the bounce averages of μ, and of J = ∮ p∥ ds. */
  readonly muScatterRel: number;
  readonly jScatterRel: number;
}

/**
 * Keeps the clock of a trapped motion. A bounce ends each time the guiding centre passes the minimum of |B| moving along
 * B; μ and J are taken over whole bounces; the drift is the angle about the axis of the eccentric dipole, read at those
 * passages only, so that it is bounce-averaged.
 */
export class MotionClock {
  private readonly centre: Float64Array;
  private readonly axis: Float64Array;
  private readonly acrossX: Float64Array;
  private readonly acrossY: Float64Array;
  private lastTime = 0;
  private lastSlope = Number.NaN;
  private lastAngle = Number.NaN;
  private angle = 0;
  private bounceStart = Number.NaN;
  private firstStart = Number.NaN;
  private firstAngle = 0;
  private muSum = 0;
  private muTime = 0;
  private jSum = 0;
  private readonly mu = { n: 0, sum: 0, squares: 0 };
  private readonly j = { n: 0, sum: 0, squares: 0 };
  private previousAngle = 0;
  private driftPeriodS = Number.NaN;

  constructor(model: FieldModel) {
    this.centre = eccentricCentre(model);
    this.axis = model.dipoleAxis;
    const [ax, ay, az] = this.axis;
    const across = Math.hypot(ax, ay);
    this.acrossX = across > 0 ? Float64Array.of(-ay / across, ax / across, 0) : Float64Array.of(1, 0, 0);
    const [ex, ey, ez] = this.acrossX;
    this.acrossY = Float64Array.of(ay * ez - az * ey, az * ex - ax * ez, ax * ey - ay * ex);
  }

  /** Mean μ and ∫u∥² dt of the stretch since the last reading. */
  accumulate(mu: number, parallelSquared: number, dt: number): void {
    this.muSum += mu * dt;
    this.muTime += dt;
    this.jSum += parallelSquared * dt;
  }

  /**
   * @param slope - d|B|/ds at the guiding centre
   * @param jRate - u∥² now, for the share of J beyond the passage
   * @returns true once the drift has gone all the way round
   */
  read(time: number, x: number, y: number, z: number, slope: number, jRate: number): boolean {
    const dx = x - this.centre[0];
    const dy = y - this.centre[1];
    const dz = z - this.centre[2];
    const angle = Math.atan2(
      dx * this.acrossY[0] + dy * this.acrossY[1] + dz * this.acrossY[2],
      dx * this.acrossX[0] + dy * this.acrossX[1] + dz * this.acrossX[2],
    );
    const before = this.angle;
    if (!Number.isNaN(this.lastAngle)) {
      const change = angle - this.lastAngle;
      this.angle += change - 2 * Math.PI * Math.round(change / (2 * Math.PI));
    }
    this.lastAngle = angle;
    if (this.lastSlope < 0 && slope >= 0) {
      const share = this.lastSlope / (this.lastSlope - slope);
      const passage = this.lastTime + share * (time - this.lastTime);
      this.passage(passage, before + share * (this.angle - before), time - passage, jRate);
    }
    this.lastSlope = slope;
    this.lastTime = time;
    return !Number.isNaN(this.driftPeriodS);
  }

  /** Whole bounces so far. */
  get bounces(): number {
    return this.mu.n;
  }

  record(): MotionRecord {
    const bounces = this.mu.n;
    return {
      bounces,
      bouncePeriodS: bounces > 0 ? (this.bounceStart - this.firstStart) / bounces : Number.NaN,
      driftPeriodS: this.driftPeriodS,
      driftAngleRad: this.angle,
      muScatterRel: scatter(this.mu),
      jScatterRel: scatter(this.j),
    };
  }

  private passage(time: number, angle: number, beyond: number, jRate: number): void {
    const beyondJ = jRate * beyond;
    if (Number.isNaN(this.bounceStart)) {
      this.firstStart = time;
      this.firstAngle = angle;
    } else {
      add(this.mu, this.muSum / this.muTime);
      add(this.j, this.jSum - beyondJ);
      const turned = Math.abs(angle - this.firstAngle);
      if (turned >= 2 * Math.PI) {
        const earlier = Math.abs(this.previousAngle - this.firstAngle);
        const share = (2 * Math.PI - earlier) / (turned - earlier);
        this.driftPeriodS = this.bounceStart + share * (time - this.bounceStart) - this.firstStart;
      }
    }
    this.previousAngle = angle;
    this.bounceStart = time;
    this.muSum = 0;
    this.muTime = 0;
    this.jSum = beyondJ;
  }
}

interface Moments {
  n: number;
  sum: number;
  squares: number;
}

function add(moments: Moments, value: number): void {
  moments.n += 1;
  moments.sum += value;
  moments.squares += value * value;
}

function scatter({ n, sum, squares }: Moments): number {
  if (n < 2) return Number.NaN;
  const mean = sum / n;
  return Math.sqrt(Math.max(0, squares / n - mean * mean)) / Math.abs(mean);
}
