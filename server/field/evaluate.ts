import { AppError } from '../errors.ts';
import { latitudeLongitudeDeg } from '../frames/rotation.ts';
import { FieldLine } from './fieldLine.ts';
import { bLossNtAt, lossCurve } from './lossCurve.ts';
import { makeLineSegment, OPEN_RADIUS, SegmentTracer } from './tracer.ts';
import type { FieldModel, UntrappedReason } from './types.ts';

export interface Footpoint {
  readonly latitudeDeg: number;
  readonly eastLongitudeDeg: number;
}

/** Everything the service says about one point of a field. Lengths in the model's reference radius, body-fixed frame. */
export interface FieldPoint {
  readonly bNt: readonly [number, number, number];
  readonly bMagnitudeNt: number;
  readonly bMinNt: number | null;
  readonly lShell: number | null;
  readonly invariantIPlanetRadii: number | null;
  readonly apexPlanetRadii: number | null;
  /** Where the line meets the 1-bar ellipsoid, against B and along B; null where it does not. */
  readonly footpoints: readonly (Footpoint | null)[];
  readonly bLossNt: number | null;
  readonly minimaOfB: number;
  readonly trapped: boolean;
  readonly reason: UntrappedReason;
}

const MIN_RADIUS = 0.5;
const FOOTPOINT_TOLERANCE = 1e-7;

/**
 * Field, L, B_min, apex and footpoints of one point.
 *
 * @param point - (x, y, z), reference radii of the model
 * @param mirrorFieldFactor - B_m = factor × |B(P)|, ≥ 1
 * @throws {AppError} FIELD_POINT_INVALID outside 0.5 ≤ r ≤ 30 or for a factor below 1
 */
export function evaluatePoint(
  model: FieldModel,
  point: readonly [number, number, number],
  mirrorFieldFactor = 1,
): FieldPoint {
  const [x, y, z] = point;
  const radius = Math.hypot(x, y, z);
  if (!(radius >= MIN_RADIUS && radius <= OPEN_RADIUS)) {
    throw new AppError(
      'FIELD_POINT_INVALID',
      `Point at ${radius} reference radii from the centre; ${MIN_RADIUS} to ${OPEN_RADIUS} are allowed.`,
      [
        {
          field: 'pointsBodyRadii',
          detail: 'radius outside the validity',
          got: radius,
          limit: OPEN_RADIUS,
          unit: 'radii',
        },
      ],
    );
  }
  if (!(mirrorFieldFactor >= 1 && Number.isFinite(mirrorFieldFactor))) {
    throw new AppError('FIELD_POINT_INVALID', `mirrorFieldFactor is ${mirrorFieldFactor}; it must be at least 1.`, [
      { field: 'mirrorFieldFactor', detail: 'below 1', got: mirrorFieldFactor, limit: 1 },
    ]);
  }
  const tracer = new SegmentTracer(model);
  const segment = tracer.segmentInto(x, y, z, mirrorFieldFactor, makeLineSegment());
  const b = model.fieldInto(x, y, z, new Float64Array(3));
  const closed = segment.end === 'closed' && !Number.isNaN(segment.lShell);
  const bLossNt = closed ? bLossNtAt(lossCurve(model), segment.lShell) : null;
  let reason: UntrappedReason = null;
  if (segment.end === 'open') reason = 'open';
  else if (!closed || segment.belowSurface || segment.mirrorNt >= (bLossNt ?? 0)) reason = 'loss';
  return {
    bNt: [b[0], b[1], b[2]],
    bMagnitudeNt: segment.bNt,
    bMinNt: closed ? segment.bMinNt : null,
    lShell: closed ? segment.lShell : null,
    invariantIPlanetRadii: closed ? segment.invariantI : null,
    apexPlanetRadii: closed ? apexRadius(tracer, segment.length, radius) : null,
    footpoints: [footpoint(model, tracer, point, -1), footpoint(model, tracer, point, 1)],
    bLossNt,
    minimaOfB: segment.minima,
    trapped: reason === null,
    reason,
  };
}

/** Largest distance from the centre on the bounce path: sampled, then a parabola through the three highest. */
function apexRadius(tracer: SegmentTracer, length: number, pointRadius: number): number {
  if (length === 0) return pointRadius;
  const point = new Float64Array(3);
  const radiusAt = (s: number) => {
    tracer.segmentPointInto(Math.min(Math.max(s, 0), length), point);
    return Math.hypot(point[0], point[1], point[2]);
  };
  const count = 200;
  let best = 0;
  let bestRadius = 0;
  for (let k = 0; k <= count; k++) {
    const r = radiusAt((length * k) / count);
    if (r > bestRadius) {
      best = k;
      bestRadius = r;
    }
  }
  let low = (length * (best - 1)) / count;
  let high = (length * (best + 1)) / count;
  for (let step = 0; step < 40; step++) {
    const third = (high - low) / 3;
    if (radiusAt(low + third) < radiusAt(high - third)) low += third;
    else high -= third;
  }
  return Math.max(bestRadius, radiusAt((low + high) / 2));
}

function footpoint(
  model: FieldModel,
  tracer: SegmentTracer,
  [x, y, z]: readonly [number, number, number],
  direction: 1 | -1,
): Footpoint | null {
  if (tracer.surfaceRatio(x, y, z) < 1) return null;
  const line = new FieldLine(model.fieldInto);
  const end = line.trace(x, y, z, direction, Number.POSITIVE_INFINITY, 0.9, OPEN_RADIUS, FOOTPOINT_TOLERANCE);
  if (end !== 'sphere') return null;
  const point = new Float64Array(3);
  const ratioAt = (s: number) => {
    line.positionInto(s, point);
    return tracer.surfaceRatio(point[0], point[1], point[2]);
  };
  // The first crossing: walk the steps, then bisect.
  let low = 0;
  let high = line.lengthRadii;
  for (let step = 1; step <= line.count; step++) {
    const s = line.stepStart(step);
    if (ratioAt(s) < 1) {
      high = s;
      break;
    }
    low = s;
  }
  for (let step = 0; step < 50; step++) {
    const middle = 0.5 * (low + high);
    if (ratioAt(middle) < 1) high = middle;
    else low = middle;
  }
  line.positionInto(high, point);
  return latitudeLongitudeDeg(point[0], point[1], point[2]);
}

/** A field line from a start point both ways to the planet or to the open limit: shape (n, 3) flattened, for figures. */
export function fieldLinePoints(
  model: FieldModel,
  start: readonly [number, number, number],
  pointsPerLeg = 120,
): Float64Array {
  const half = (direction: 1 | -1): number[] => {
    const line = new FieldLine(model.fieldInto);
    line.trace(start[0], start[1], start[2], direction, Number.POSITIVE_INFINITY, 1, OPEN_RADIUS, FOOTPOINT_TOLERANCE);
    const point = new Float64Array(3);
    const flat: number[] = [];
    for (let k = 0; k <= pointsPerLeg; k++) {
      line.positionInto((line.lengthRadii * k) / pointsPerLeg, point);
      flat.push(point[0], point[1], point[2]);
    }
    return flat;
  };
  const back = half(-1);
  const forward = half(1);
  const reversed: number[] = [];
  for (let i = back.length - 3; i >= 3; i -= 3) reversed.push(back[i], back[i + 1], back[i + 2]);
  return Float64Array.from([...reversed, ...forward]);
}
