import { PLANETS } from '../constants/planets.ts';
import { FieldLine } from './fieldLine.ts';
import { mcIlwainL } from './lShell.ts';
import type { FieldModel } from './types.ts';

/** A line that leaves this radius (reference radii) is open: it does not come back into the belts. */
export const OPEN_RADIUS = 30;
/** Local error of position along the line, reference radii: keeps L to 1e-7. */
const LINE_TOLERANCE = 3e-8;

/** The segment of a field line between the mirror points of one particle. Reused between calls. */
export interface LineSegment {
  end: 'closed' | 'open' | 'singular';
  /** |B| at the point, and the mirror field, nT. */
  bNt: number;
  mirrorNt: number;
  /** I = ∫ sqrt(1 − B/B_m) ds, reference radii. */
  invariantI: number;
  lShell: number;
  bMinNt: number;
  /** Arc length of the segment, and how many minima |B| has on it. */
  length: number;
  minima: number;
  /** True where the segment enters the 1-bar ellipsoid. */
  belowSurface: boolean;
}

/** How finely a tracer works. */
interface TracerOptions {
  /** Where a line counts as open, reference radii. */
  readonly openRadius?: number;
  /** Local error of position along the line, reference radii. */
  readonly tolerance?: number;
  /** Nodes of the integral, as a share of those that give 1e-6. */
  readonly nodeShare?: number;
}

/**
 * Traces the bounce path of a particle through a point and integrates its second invariant.
 *
 * I is taken by the midpoint rule in θ with s = S (1 − cos θ)/2, which turns both square-root ends into smooth ones and
 * then converges like a spectral method; nodes grow with the length of the line against the scale of its ends.
 * Accuracy on the check points of test/golden/field: I, B_min and L to 1e-6 or better.
 */
export class SegmentTracer {
  readonly model: FieldModel;
  readonly forward: FieldLine;
  readonly backward: FieldLine;
  private readonly b = new Float64Array(3);
  private readonly point = new Float64Array(3);
  private readonly magnitudes = new Float64Array(1024);
  private readonly equatorial: number;
  private readonly polar: number;
  /** Arc lengths from the point to the mirror points, forward and backward. */
  private forwardLength = 0;
  private backwardLength = 0;
  private readonly openRadius: number;
  private readonly tolerance: number;
  private readonly nodeShare: number;

  /** @param options - other than the defaults only for the nodes of a map */
  constructor(model: FieldModel, options: TracerOptions = {}) {
    this.model = model;
    this.openRadius = options.openRadius ?? OPEN_RADIUS;
    this.tolerance = options.tolerance ?? LINE_TOLERANCE;
    this.nodeShare = options.nodeShare ?? 1;
    this.forward = new FieldLine(model.fieldInto);
    this.backward = new FieldLine(model.fieldInto);
    const planet = PLANETS[model.planet];
    this.equatorial = planet.equatorialRadiusKm / model.referenceRadiusKm;
    this.polar = planet.polarRadiusKm / model.referenceRadiusKm;
  }

  magnitude(x: number, y: number, z: number): number {
    const b = this.model.fieldInto(x, y, z, this.b);
    return Math.sqrt(b[0] * b[0] + b[1] * b[1] + b[2] * b[2]);
  }

  /** (x² + y²)/a² + z²/c² of the 1-bar ellipsoid: below 1 is inside the planet. */
  surfaceRatio(x: number, y: number, z: number): number {
    return (x * x + y * y) / (this.equatorial * this.equatorial) + (z * z) / (this.polar * this.polar);
  }

  /**
   * @param x,y,z - reference radii, body-fixed
   * @param mirrorFieldFactor - B_m = factor · |B(P)|, ≥ 1; 1 is the particle that mirrors at the point
   */
  segmentInto(x: number, y: number, z: number, mirrorFieldFactor: number, out: LineSegment): LineSegment {
    const bNt = this.magnitude(x, y, z);
    out.bNt = bNt;
    out.mirrorNt = bNt * mirrorFieldFactor;
    out.invariantI = 0;
    out.length = 0;
    out.minima = 1;
    out.bMinNt = bNt;
    out.belowSurface = this.surfaceRatio(x, y, z) < 1;
    out.end = 'closed';
    this.forwardLength = 0;
    this.backwardLength = 0;

    if (mirrorFieldFactor > 1) {
      if (!this.leg(this.forward, x, y, z, 1, out) || !this.leg(this.backward, x, y, z, -1, out))
        return this.noLabel(out);
      this.forwardLength = this.mirrorLength(this.forward, out.mirrorNt);
      this.backwardLength = this.mirrorLength(this.backward, out.mirrorNt);
    } else {
      const slope = this.fieldSlope(x, y, z, bNt);
      if (slope === 0) return this.equatorialLabel(out);
      const direction = slope > 0 ? -1 : 1;
      const line = direction === 1 ? this.forward : this.backward;
      if (!this.leg(line, x, y, z, direction, out)) return this.noLabel(out);
      const length = this.mirrorLength(line, out.mirrorNt);
      if (length === 0) return this.equatorialLabel(out);
      if (direction === 1) this.forwardLength = length;
      else this.backwardLength = length;
    }
    this.integrate(out);
    out.lShell = mcIlwainL(out.invariantI, out.mirrorNt, this.model.dipoleMomentNt);
    return out;
  }

  /** Point of the last segment at arc length s from its backward mirror point, shape (3,); returns |B|, nT. */
  segmentPointInto(s: number, out: Float64Array): number {
    const fromPoint = s - this.backwardLength;
    // A leg that was not traced holds nothing of this segment, not even its common point.
    const onForward = this.backwardLength === 0 || (fromPoint > 0 && this.forwardLength > 0);
    return onForward ? this.forward.evaluateInto(fromPoint, out) : this.backward.evaluateInto(-fromPoint, out);
  }

  private leg(line: FieldLine, x: number, y: number, z: number, direction: 1 | -1, out: LineSegment): boolean {
    const end = line.trace(x, y, z, direction, out.mirrorNt, 0, this.openRadius, this.tolerance);
    if (end === 'mirror') return true;
    out.end = end === 'singular' || end === 'sphere' ? 'singular' : 'open';
    return false;
  }

  private noLabel(out: LineSegment): LineSegment {
    out.invariantI = Number.NaN;
    out.lShell = Number.NaN;
    out.bMinNt = Number.NaN;
    return out;
  }

  private equatorialLabel(out: LineSegment): LineSegment {
    out.lShell = mcIlwainL(0, out.mirrorNt, this.model.dipoleMomentNt);
    return out;
  }

  /** d|B|/ds along B by central difference, with differences at round-off taken as zero. */
  private fieldSlope(x: number, y: number, z: number, bNt: number): number {
    const b = this.b;
    const step = 1e-5 * Math.hypot(x, y, z);
    const dx = (b[0] / bNt) * step;
    const dy = (b[1] / bNt) * step;
    const dz = (b[2] / bNt) * step;
    const difference = this.magnitude(x + dx, y + dy, z + dz) - this.magnitude(x - dx, y - dy, z - dz);
    return Math.abs(difference) < 1e-13 * bNt ? 0 : difference;
  }

  /** Arc length at which |B| rises through B_m in the last step of a leg. */
  private mirrorLength(line: FieldLine, mirrorNt: number): number {
    let high = line.lengthRadii;
    let low = line.stepStart(line.count - 1);
    let fLow = line.bNt[line.count - 1] - mirrorNt;
    if (!(fLow < 0)) {
      // The whole segment lies inside the first step: look for a point below B_m first.
      low = high;
      for (let shrink = 0; shrink < 40 && !(fLow < 0); shrink++) {
        low *= 0.5;
        fLow = line.magnitudeAt(low) - mirrorNt;
      }
      if (!(fLow < 0)) return 0;
    }
    let fHigh = line.bNt[line.count] - mirrorNt;
    let s = high;
    for (let step = 0; step < 60; step++) {
      // Illinois variant of regula falsi: superlinear and always bracketed.
      s = (low * fHigh - high * fLow) / (fHigh - fLow);
      const f = line.magnitudeAt(s) - mirrorNt;
      if (Math.abs(f) < 1e-13 * mirrorNt || high - low < 1e-13) break;
      if (f < 0) {
        low = s;
        fLow = f;
        fHigh *= 0.5;
      } else {
        high = s;
        fHigh = f;
        fLow *= 0.5;
      }
    }
    return s;
  }

  private integrate(out: LineSegment): void {
    const { magnitudes, point } = this;
    const total = this.forwardLength + this.backwardLength;
    out.length = total;
    this.segmentPointInto(0, point);
    let below = out.belowSurface || this.surfaceRatio(point[0], point[1], point[2]) < 1;
    const backEndRadius = Math.hypot(point[0], point[1], point[2]);
    this.segmentPointInto(total, point);
    below = below || this.surfaceRatio(point[0], point[1], point[2]) < 1;
    const endRadius = Math.min(backEndRadius, Math.hypot(point[0], point[1], point[2]));

    const nodes = Math.min(1000, Math.ceil(this.nodeShare * (40 + 22 * Math.sqrt(total / endRadius))));
    let sum = 0;
    let least = 0;
    for (let k = 0; k < nodes; k++) {
      const theta = ((k + 0.5) * Math.PI) / nodes;
      const b = this.segmentPointInto(0.5 * total * (1 - Math.cos(theta)), point);
      magnitudes[k] = b;
      if (b < magnitudes[least]) least = k;
      const inside = 1 - b / out.mirrorNt;
      if (inside > 0) sum += Math.sqrt(inside) * Math.sin(theta);
      if (!below && this.surfaceRatio(point[0], point[1], point[2]) < 1) below = true;
    }
    out.invariantI = (0.5 * total * Math.PI * sum) / nodes;
    out.belowSurface = below;
    let minima = 0;
    for (let k = 1; k < nodes - 1; k++) {
      if (magnitudes[k] < magnitudes[k - 1] && magnitudes[k] <= magnitudes[k + 1]) minima += 1;
    }
    out.minima = Math.max(1, minima);
    out.bMinNt = this.refineMinimum(total, nodes, least);
  }

  /** Golden-section search round the least node. */
  private refineMinimum(total: number, nodes: number, least: number): number {
    const { point } = this;
    const at = (k: number) => 0.5 * total * (1 - Math.cos((Math.min(Math.max(k + 0.5, 0), nodes) * Math.PI) / nodes));
    const golden = 0.6180339887498949;
    let low = at(least - 1);
    let high = at(least + 1);
    let s1 = high - golden * (high - low);
    let s2 = low + golden * (high - low);
    let b1 = this.segmentPointInto(s1, point);
    let b2 = this.segmentPointInto(s2, point);
    for (let step = 0; step < 12; step++) {
      if (b1 < b2) {
        high = s2;
        s2 = s1;
        b2 = b1;
        s1 = high - golden * (high - low);
        b1 = this.segmentPointInto(s1, point);
      } else {
        low = s1;
        s1 = s2;
        b1 = b2;
        s2 = low + golden * (high - low);
        b2 = this.segmentPointInto(s2, point);
      }
    }
    return Math.min(b1, b2, this.magnitudes[least]);
  }
}

export function makeLineSegment(): LineSegment {
  return {
    end: 'closed',
    bNt: 0,
    mirrorNt: 0,
    invariantI: 0,
    lShell: 0,
    bMinNt: 0,
    length: 0,
    minima: 1,
    belowSurface: false,
  };
}
