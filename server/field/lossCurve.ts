import { PLANETS } from '../constants/planets.ts';
import { readReferenceJson } from '../constants/reference.ts';
import { makeLineSegment, SegmentTracer } from './tracer.ts';
import type { FieldModel } from './types.ts';

/**
 * B_loss(L): the largest mirror field that a drift shell can have and still clear the atmosphere all the way round.
 *
 * A shell is fixed by (L, B_m), and its mirror points are exactly the points whose locally mirroring particle has that L
 * at that |B|. So the shells that touch the surface are the pairs (L(P), |B(P)|) of the surface's own points, and the
 * first to touch at a given L is the one of least |B|: B_loss(L) = min |B(P)| over surface points with L(P) = L. The
 * minimum lies at the weak pole of the offset field, where a drifting particle mirrors deepest.
 *
 * Multipole fields have a second family of lines: short ones that hug the surface round its weakest spot, where |B| is
 * small and L, by its definition, large. Particles do not drift between the two families, so surface points count only
 * when their bounce path reaches out to APEX_SHARE of L, as every line of a shell round the offset dipole does.
 *
 * Where lines of one shell split, their mirror points dip in slivers narrower than the grid, and the surface's own shells miss
 * it: by half and more under O8 at L 2 to 6, by up to a tenth under AH5. For these fields shells were traced whole ahead
 * (db/reference/loss-curves), and the lower of the two curves holds.
 *
 * Surface: the 1-bar ellipsoid raised by the loss altitude. Contours of L are followed across the edges of a
 * latitude-longitude grid; the table is then exact to the grid (2°): about 1 % in B_loss.
 */
export interface LossCurve {
  readonly altitudeKm: number;
  /** Shape (n,), ln L, uniform. */
  readonly lnL: Float64Array;
  /** Shape (n,), nT; 0 where no shell of that L clears the surface. */
  readonly bLossNt: Float64Array;
}

/** Mirror points this far above the 1-bar level still lose their particles; common practice, no source. */
export const LOSS_ALTITUDE_KM = 0;

const LATITUDES = 90;
const LONGITUDES = 180;
const L_FIRST = 1;
const L_LAST = 30;
const L_COUNT = 171;
/** Neighbouring points whose L differ by more than this (in ln L) lie on different branches: no contour between them. */
const BRANCH_JUMP = 0.35;
/**
 * A shell round a dipole displaced by up to 0.55 radii reaches at least (L − 0.55) from the centre; below L ≈ 1.4 the
 * two families merge and every shell is lost. Our own criterion; for a centred dipole it changes nothing.
 */
const APEX_SHARE = 0.7;

const cache = new Map<FieldModel, LossCurve>();

/** The loss curve of a model at the standard loss altitude; worked out once per process (about a second). */
export function lossCurve(model: FieldModel): LossCurve {
  let curve = cache.get(model);
  if (curve === undefined) {
    curve = withWholeShells(model.id, buildLossCurve(model, LOSS_ALTITUDE_KM));
    cache.set(model, curve);
  }
  return curve;
}

export function buildLossCurve(model: FieldModel, altitudeKm: number): LossCurve {
  const { lnLAt, bAt } = labelSurface(model, altitudeKm);
  const lnL = new Float64Array(L_COUNT);
  const step = Math.log(L_LAST / L_FIRST) / (L_COUNT - 1);
  for (let i = 0; i < L_COUNT; i++) lnL[i] = Math.log(L_FIRST) + i * step;
  const bLossNt = new Float64Array(L_COUNT).fill(Number.POSITIVE_INFINITY);

  const edge = (p: number, q: number): void => {
    const a = lnLAt[p];
    const b = lnLAt[q];
    if (!(Math.abs(a - b) < BRANCH_JUMP)) return;
    const first = Math.max(0, Math.ceil((Math.min(a, b) - lnL[0]) / step));
    const last = Math.min(L_COUNT - 1, Math.floor((Math.max(a, b) - lnL[0]) / step));
    for (let i = first; i <= last; i++) {
      const share = a === b ? 0 : (lnL[i] - a) / (b - a);
      const field = bAt[p] + share * (bAt[q] - bAt[p]);
      if (field < bLossNt[i]) bLossNt[i] = field;
    }
  };
  for (let row = 0; row < LATITUDES; row++) {
    for (let column = 0; column < LONGITUDES; column++) {
      const p = row * LONGITUDES + column;
      edge(p, row * LONGITUDES + ((column + 1) % LONGITUDES));
      if (row + 1 < LATITUDES) edge(p, p + LONGITUDES);
    }
  }
  fillGaps(bLossNt);
  return { altitudeKm, lnL, bLossNt };
}

interface WholeShells {
  readonly lShell: readonly number[];
  readonly bLossNt: readonly number[];
}

const WHOLE_SHELLS: Readonly<Record<string, string>> = {
  'neptune-o8': 'neptune-o8.json',
  'uranus-ah5': 'uranus-ah5.json',
};

/** The lower of the surface's curve and that of whole shells, linear in ln L between the latter's values. */
function withWholeShells(modelId: string, curve: LossCurve): LossCurve {
  const file = WHOLE_SHELLS[modelId];
  if (file === undefined) return curve;
  const { lShell, bLossNt } = readReferenceJson<WholeShells>('loss-curves', file);
  const last = lShell.length - 1;
  const lower = curve.bLossNt.map((surface, i) => {
    const l = Math.exp(curve.lnL[i]);
    if (l < lShell[0] || l > lShell[last]) return surface;
    let k = 0;
    while (k < last - 1 && lShell[k + 1] <= l) k += 1;
    const share = Math.log(l / lShell[k]) / Math.log(lShell[k + 1] / lShell[k]);
    return Math.min(surface, bLossNt[k] + share * (bLossNt[k + 1] - bLossNt[k]));
  });
  return { ...curve, bLossNt: lower };
}

/** B_loss at an L, nT, linear in ln L between the nodes. */
export function bLossNtAt(curve: LossCurve, lShell: number): number {
  const { lnL, bLossNt } = curve;
  const position = (Math.log(lShell) - lnL[0]) / (lnL[1] - lnL[0]);
  if (!(position >= 0)) return 0;
  if (position >= lnL.length - 1) return bLossNt[lnL.length - 1];
  const index = Math.floor(position);
  const share = position - index;
  return bLossNt[index] + share * (bLossNt[index + 1] - bLossNt[index]);
}

function labelSurface(model: FieldModel, altitudeKm: number): { lnLAt: Float64Array; bAt: Float64Array } {
  const planet = PLANETS[model.planet];
  const tracer = new SegmentTracer(model);
  const segment = makeLineSegment();
  const lnLAt = new Float64Array(LATITUDES * LONGITUDES);
  const bAt = new Float64Array(LATITUDES * LONGITUDES);
  const a = (planet.equatorialRadiusKm + altitudeKm) / model.referenceRadiusKm;
  const c = (planet.polarRadiusKm + altitudeKm) / model.referenceRadiusKm;
  for (let row = 0; row < LATITUDES; row++) {
    const latitude = ((row + 0.5) / LATITUDES - 0.5) * Math.PI;
    for (let column = 0; column < LONGITUDES; column++) {
      const longitude = (2 * Math.PI * column) / LONGITUDES;
      const x = a * Math.cos(latitude) * Math.cos(longitude);
      const y = a * Math.cos(latitude) * Math.sin(longitude);
      const z = c * Math.sin(latitude);
      const index = row * LONGITUDES + column;
      tracer.segmentInto(x, y, z, 1, segment);
      const belongs = segment.end === 'closed' && apexOf(tracer, segment.length) >= APEX_SHARE * segment.lShell;
      lnLAt[index] = belongs || segment.lShell * APEX_SHARE < 1 ? Math.log(segment.lShell) : Number.NaN;
      bAt[index] = segment.bNt;
    }
  }
  return { lnLAt, bAt };
}

/** Shells inside the first that was met never clear the surface; gaps further out take their inner neighbour. */
function fillGaps(bLossNt: Float64Array): void {
  let last = 0;
  for (let i = 0; i < bLossNt.length; i++) {
    if (bLossNt[i] === Number.POSITIVE_INFINITY) bLossNt[i] = last;
    else last = bLossNt[i];
  }
}

/** Largest distance from the centre on the last traced segment, to a few per cent. */
function apexOf(tracer: SegmentTracer, length: number): number {
  const point = new Float64Array(3);
  let apex = 0;
  for (let k = 0; k <= 24; k++) {
    tracer.segmentPointInto((length * k) / 24, point);
    apex = Math.max(apex, Math.hypot(point[0], point[1], point[2]));
  }
  return apex;
}
