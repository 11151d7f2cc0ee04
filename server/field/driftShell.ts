import { PLANETS } from '../constants/planets.ts';
import { eccentricCentre } from './eccentricCentre.ts';
import { LOSS_ALTITUDE_KM } from './lossCurve.ts';
import { makeLineSegment, SegmentTracer } from './tracer.ts';
import type { FieldModel } from './types.ts';

/** One field line of a drift shell. Positions in reference radii, body-fixed; altitudes in km over the 1-bar ellipsoid. */
export interface DriftShellLine {
  /** Longitude of the line's start point about the axis of the eccentric dipole, radian. */
  readonly magneticLongitudeRad: number;
  /** Distance of the start point from the eccentric centre, in the plane across the axis through that centre. */
  readonly equatorialRadius: number;
  readonly invariantI: number;
  readonly bMinNt: number;
  readonly minimumPoint: Float64Array;
  readonly mirrorPoints: readonly [Float64Array, Float64Array];
  readonly mirrorAltitudesKm: readonly [number, number];
}

/** The drift shell of one (I, B_m), line by line round the dipole axis. */
export interface DriftShell {
  readonly lShell: number;
  readonly mirrorNt: number;
  /** In order of longitude: those asked for and those added where the shell dips; fewer where it does not close. */
  readonly lines: readonly DriftShellLine[];
  /** False where some longitude has no line of this I at this B_m within reach of its neighbour. */
  readonly closed: boolean;
  /** h_min(L, B_m): the lowest mirror altitude all the way round, km; negative inside the planet; NaN when not closed. */
  readonly lowestMirrorAltitudeKm: number;
}

const DEFAULT_LONGITUDES = 72;
/** Relative error of L at which a line counts as belonging to the shell. */
const L_TOLERANCE = 1e-9;
/** Factor between trial radii while a line is looked for; and how far from the neighbour one is looked for. */
const BRACKET_FACTOR = 1.03;
const BRACKET_STEPS = 14;
const FIRST_REACH = 1.8;
const FIRST_STEPS = 90;
/**
 * Lines are added where neighbouring mirror points lie further apart than this plus their height over the lowest, km:
 * a path over the surface cannot well dip deeper between two points than they are apart.
 */
const GAP_MIN_KM = 1000;
const REFINE_PASSES = 6;
/** A shell that stays this far out needs no finer look. */
const REFINE_BELOW_KM = 3000;
/** Relative, of B_loss where the altitude jumps past the surface; elsewhere it is found to 0.2 km of altitude. */
const B_LOSS_REL = 2e-4;
/** Step of ln B_m in the search for the first shell that touches the planet. */
const SCAN_STEP = 0.3;

/**
 * Traces drift shells: at each longitude about the axis of the eccentric dipole, the field line on which a particle of
 * mirror field B_m has the shell's I. (L, B_m) and (I, B_m) say the same, because L is one-to-one with I at a given B_m.
 *
 * At the first longitude the outermost such line is taken; from there on the solution starts at the neighbour's radius, so
 * that the shell is followed as a particle follows it. Method: bracket, then Illinois steps on ln L.
 *
 * @source Definition of the drift shell: McIlwain (1961), J. Geophys. Res. 66, 3681; Roederer (1970), Dynamics of
 *   Geomagnetically Trapped Radiation, section III
 */
export class DriftShellTracer {
  readonly model: FieldModel;
  private readonly tracer: SegmentTracer;
  private readonly segment = makeLineSegment();
  private readonly start = new Float64Array(3);
  private readonly lowest = new Float64Array(3);
  private readonly probe = new Float64Array(3);
  private readonly centre: Float64Array;
  private readonly acrossX: Float64Array;
  private readonly acrossY: Float64Array;
  private readonly equatorial: number;

  constructor(model: FieldModel) {
    this.model = model;
    this.tracer = new SegmentTracer(model);
    this.centre = eccentricCentre(model);
    const [ax, ay, az] = model.dipoleAxis;
    const across = Math.hypot(ax, ay);
    this.acrossX = across > 0 ? Float64Array.of(-ay / across, ax / across, 0) : Float64Array.of(1, 0, 0);
    const [ex, ey, ez] = this.acrossX;
    this.acrossY = Float64Array.of(ay * ez - az * ey, az * ex - ax * ez, ax * ey - ay * ex);
    this.equatorial = PLANETS[model.planet].equatorialRadiusKm / model.referenceRadiusKm;
  }

  /**
   * @param lShell - reference radii
   * @param mirrorNt - B_m, nT; at least M/L³, the field at which I = 0
   * @param longitudes - lines round the axis
   * @throws {TypeError} when no dipole shell of this L has so small a B_m
   */
  shell(lShell: number, mirrorNt: number, longitudes = DEFAULT_LONGITUDES): DriftShell {
    if (!(mirrorNt * lShell ** 3 >= this.model.dipoleMomentNt * (1 - 1e-12))) {
      throw new TypeError(`mirror field ${mirrorNt} nT lies below the equatorial field of L = ${lShell}`);
    }
    const lines: DriftShellLine[] = [];
    let radius = this.firstRadius(lShell, mirrorNt);
    for (let i = 0; i < longitudes && Number.isFinite(radius); i++) {
      const longitude = (2 * Math.PI * i) / longitudes;
      radius = this.solve(longitude, lShell, mirrorNt, radius);
      if (Number.isFinite(radius)) lines.push(this.record(longitude, radius, mirrorNt));
    }
    const closed = lines.length === longitudes;
    if (closed) this.refine(lines, lShell, mirrorNt);
    const lowestMirrorAltitudeKm = closed ? lowestAltitude(lines) : Number.NaN;
    return { lShell, mirrorNt, lines, closed, lowestMirrorAltitudeKm };
  }

  /** Puts lines between those whose low mirror points lie far apart: there a shell may dip between two longitudes. */
  private refine(lines: DriftShellLine[], lShell: number, mirrorNt: number): void {
    for (let pass = 0; pass < REFINE_PASSES; pass++) {
      const lowest = lines.reduce(
        (least, line) => Math.min(least, ...line.mirrorAltitudesKm),
        Number.POSITIVE_INFINITY,
      );
      if (lowest > REFINE_BELOW_KM) return;
      let added = 0;
      for (let i = lines.length - 1; i >= 0; i--) {
        const line = lines[i];
        const next = lines[(i + 1) % lines.length];
        const wanted = ([0, 1] as const).some((side) => {
          const height = Math.min(line.mirrorAltitudesKm[side], next.mirrorAltitudesKm[side]) - lowest;
          const [p, q] = [line.mirrorPoints[side], next.mirrorPoints[side]];
          const gapKm = Math.hypot(p[0] - q[0], p[1] - q[1], p[2] - q[2]) * this.model.referenceRadiusKm;
          return gapKm > GAP_MIN_KM + height;
        });
        if (!wanted) continue;
        const end = next.magneticLongitudeRad + (i + 1 === lines.length ? 2 * Math.PI : 0);
        const longitude = 0.5 * (line.magneticLongitudeRad + end);
        const radius = this.solve(longitude, lShell, mirrorNt, line.equatorialRadius);
        if (Number.isNaN(radius)) continue;
        lines.splice(i + 1, 0, this.record(longitude, radius, mirrorNt));
        added += 1;
      }
      if (added === 0) return;
    }
  }

  /** ln L of the line through a radius at a longitude for mirror field B_m; ±Infinity where there is none. */
  private lnLAt(longitude: number, radius: number, mirrorNt: number): number {
    const { start, tracer, segment } = this;
    const c = radius * Math.cos(longitude);
    const s = radius * Math.sin(longitude);
    for (let k = 0; k < 3; k++) start[k] = this.centre[k] + c * this.acrossX[k] + s * this.acrossY[k];
    const bNt = tracer.magnitude(start[0], start[1], start[2]);
    if (mirrorNt > bNt * (1 + 1e-9)) {
      tracer.segmentInto(start[0], start[1], start[2], mirrorNt / bNt, segment);
      if (segment.end === 'open') return Number.POSITIVE_INFINITY;
      return segment.end === 'singular' ? Number.NEGATIVE_INFINITY : Math.log(segment.lShell);
    }
    // The start point lies above the mirror point: go to the minimum of |B| on its line first.
    tracer.segmentInto(start[0], start[1], start[2], 1, segment);
    if (segment.end !== 'closed') return segment.end === 'open' ? Number.POSITIVE_INFINITY : Number.NEGATIVE_INFINITY;
    const least = this.minimumInto(start);
    // With no room for a bounce, ln L goes on smoothly as that of the particle that rests at the minimum.
    if (least >= mirrorNt) return Math.log(this.model.dipoleMomentNt / least) / 3;
    tracer.segmentInto(start[0], start[1], start[2], mirrorNt / least, segment);
    return segment.end === 'closed' ? Math.log(segment.lShell) : Number.POSITIVE_INFINITY;
  }

  /** Point of least |B| on the last segment, into `out`; returns |B|, nT. */
  private minimumInto(out: Float64Array): number {
    const { tracer, segment, probe } = this;
    const total = segment.length;
    if (total === 0) return segment.bNt;
    const count = 48;
    let best = 0;
    let least = Number.POSITIVE_INFINITY;
    for (let k = 0; k <= count; k++) {
      const b = tracer.segmentPointInto((total * k) / count, probe);
      if (b < least) {
        least = b;
        best = k;
      }
    }
    let low = Math.max(0, (total * (best - 1)) / count);
    let high = Math.min(total, (total * (best + 1)) / count);
    for (let step = 0; step < 30; step++) {
      const third = (high - low) / 3;
      if (tracer.segmentPointInto(low + third, probe) < tracer.segmentPointInto(high - third, probe)) high -= third;
      else low += third;
    }
    return tracer.segmentPointInto((low + high) / 2, out);
  }

  /** Radius of the outermost line of the shell at longitude 0; NaN when there is none. */
  private firstRadius(lShell: number, mirrorNt: number): number {
    const target = Math.log(lShell);
    let radius = FIRST_REACH * lShell;
    for (let step = 0; step < FIRST_STEPS; step++) {
      if (this.lnLAt(0, radius, mirrorNt) < target) return radius;
      radius /= BRACKET_FACTOR;
    }
    return Number.NaN;
  }

  private solve(longitude: number, lShell: number, mirrorNt: number, guess: number): number {
    const target = Math.log(lShell);
    const excess = (radius: number) => this.lnLAt(longitude, radius, mirrorNt) - target;
    let low = guess;
    let fLow = excess(low);
    let high = guess;
    let fHigh = fLow;
    for (let step = 0; fLow > 0; step++) {
      if (step === BRACKET_STEPS) return Number.NaN;
      high = low;
      fHigh = fLow;
      low /= BRACKET_FACTOR;
      fLow = excess(low);
    }
    for (let step = 0; fHigh < 0; step++) {
      if (step === BRACKET_STEPS) return Number.NaN;
      low = high;
      fLow = fHigh;
      high *= BRACKET_FACTOR;
      fHigh = excess(high);
    }
    for (let step = 0; step < 80; step++) {
      if (Math.abs(fLow) < L_TOLERANCE) return low;
      if (Math.abs(fHigh) < L_TOLERANCE) return high;
      if (high - low < 1e-13 * high) break;
      const finite = Number.isFinite(fLow) && Number.isFinite(fHigh);
      const middle = finite ? (low * fHigh - high * fLow) / (fHigh - fLow) : 0.5 * (low + high);
      const f = excess(middle);
      if (Math.abs(f) < L_TOLERANCE) return middle;
      if (f < 0) {
        low = middle;
        fLow = f;
        if (finite) fHigh *= 0.5;
      } else if (f > 0) {
        high = middle;
        fHigh = f;
        if (finite) fLow *= 0.5;
      } else return Number.NaN;
    }
    // A jump of L lies between the two: the shell has no line here.
    return Number.NaN;
  }

  /** Traces the solved line once more and keeps what is asked of it. */
  private record(longitude: number, radius: number, mirrorNt: number): DriftShellLine {
    const { tracer, segment, lowest } = this;
    this.lnLAt(longitude, radius, mirrorNt);
    const rests = segment.length === 0 || segment.mirrorNt < mirrorNt * (1 - 1e-9);
    const ends = [new Float64Array(3), new Float64Array(3)] as const;
    const minimumPoint = new Float64Array(3);
    if (rests) {
      lowest.set(this.start);
      for (const end of ends) end.set(lowest);
      minimumPoint.set(lowest);
    } else {
      this.minimumInto(minimumPoint);
      tracer.segmentPointInto(0, ends[0]);
      tracer.segmentPointInto(segment.length, ends[1]);
    }
    return {
      magneticLongitudeRad: longitude,
      equatorialRadius: radius,
      invariantI: rests ? 0 : segment.invariantI,
      bMinNt: rests ? mirrorNt : segment.bMinNt,
      minimumPoint,
      mirrorPoints: ends,
      mirrorAltitudesKm: [this.altitudeKm(ends[0]), this.altitudeKm(ends[1])],
    };
  }

  /** Height over the 1-bar ellipsoid along the radius from the centre, km; of the true height but for flattening². */
  private altitudeKm(point: Float64Array): number {
    const [x, y, z] = point;
    const share = 1 / Math.sqrt(this.tracer.surfaceRatio(x, y, z));
    return Math.hypot(x, y, z) * (1 - share) * this.model.referenceRadiusKm;
  }

  /**
   * B_loss(L) from whole shells: the largest B_m whose shell clears the 1-bar ellipsoid, raised by `altitudeKm`, all the
   * way round. Regula falsi on ln B_m. A shell that does not close on itself (its particles change to another
   * branch on the way) is passed over in the search for a bracket and counts as lost inside it.
   *
   * @returns nT to B_LOSS_REL; 0 where not even the shell of I = 0 clears the planet
   */
  bLossNt(lShell: number, altitudeKm = LOSS_ALTITUDE_KM, longitudes = DEFAULT_LONGITUDES / 2): number {
    const clearance = (lnB: number) =>
      this.shell(lShell, Math.exp(lnB), longitudes).lowestMirrorAltitudeKm - altitudeKm;
    const first = Math.log((this.model.dipoleMomentNt / lShell ** 3) * 1.02);
    // No mirror point outside the planet has more than the field of a pole displaced by a good half radius.
    const last = Math.log((2 * this.model.dipoleMomentNt) / (0.35 * this.equatorial) ** 3);
    let low = Number.NaN;
    let fLow = Number.NaN;
    let high = last;
    let fHigh = Number.NaN;
    // Up from the equator in steps, so that shells far inside the planet, which mean nothing, are never asked for.
    for (let lnB = first; lnB < last; lnB += SCAN_STEP) {
      const f = clearance(lnB);
      if (f > 0) {
        low = lnB;
        fLow = f;
      } else if (f <= 0) {
        high = lnB;
        fHigh = f;
        break;
      }
    }
    if (Number.isNaN(low)) return 0;
    while (high - low > B_LOSS_REL) {
      const share = Number.isFinite(fHigh) ? fLow / (fLow - fHigh) : 0.5;
      const middle = low + Math.min(0.95, Math.max(0.05, share)) * (high - low);
      const f = clearance(middle);
      if (Math.abs(f) < 0.2) return Math.exp(middle);
      if (f > 0) {
        low = middle;
        fLow = f;
        if (Number.isFinite(fHigh)) fHigh *= 0.5;
      } else {
        high = middle;
        fHigh = f;
        fLow *= 0.5;
      }
    }
    return Math.exp(low);
  }

  /** Drift loss cone at the field minimum of a line, radian: sin²α = B_min/B_loss. */
  driftLossConeRad(lShell: number, bMinNt: number): number {
    const bLoss = this.bLossNt(lShell);
    return bLoss > bMinNt ? Math.asin(Math.sqrt(bMinNt / bLoss)) : Math.PI / 2;
  }
}

/** Least mirror altitude of both hemispheres: the lowest node of each and the parabola through its neighbours. */
function lowestAltitude(lines: readonly DriftShellLine[]): number {
  let least = Number.POSITIVE_INFINITY;
  const n = lines.length;
  for (const side of [0, 1] as const) {
    let at = 0;
    for (let i = 1; i < n; i++) {
      if (lines[i].mirrorAltitudesKm[side] < lines[at].mirrorAltitudesKm[side]) at = i;
    }
    const before = lines[(at + n - 1) % n];
    const after = lines[(at + 1) % n];
    const turn = (from: DriftShellLine, to: DriftShellLine) =>
      (to.magneticLongitudeRad - from.magneticLongitudeRad + 2 * Math.PI) % (2 * Math.PI);
    const back = turn(before, lines[at]);
    const ahead = turn(lines[at], after);
    const middle = lines[at].mirrorAltitudesKm[side];
    const slopeBack = (middle - before.mirrorAltitudesKm[side]) / back;
    const slopeAhead = (after.mirrorAltitudesKm[side] - middle) / ahead;
    const curvature = (2 * (slopeAhead - slopeBack)) / (back + ahead);
    const slope = (slopeBack * ahead + slopeAhead * back) / (back + ahead);
    const vertex = curvature > 0 ? -slope / curvature : Number.NaN;
    const inside = vertex > -back && vertex < ahead;
    least = Math.min(least, inside ? middle + 0.5 * slope * vertex : middle);
  }
  return least;
}
