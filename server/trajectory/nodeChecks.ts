import type { Planet } from '../constants/planets.ts';
import { type NodeInterpolator, PolynomialWindow } from '../ephemeris/index.ts';
import type { NodePiece } from './nodePath.ts';

/** Distance within which nodes matter for dose: beyond it no field line closes (see the field room). */
export const NEAR_PLANET_RADII = 30;
/** Spacing above this share of sqrt(r³/GM) is called coarse. */
const COARSE_SHARE = 0.1;
const MAX_LEFT_OUT = 2000;
/** Share by which the mean velocity between nodes may differ from their velocities before it is called inconsistent. */
const VELOCITY_MISMATCH = 0.05;

export interface NodeReport {
  readonly nearCount: number;
  readonly spacingS: readonly [number, number] | null;
  /** Largest spacing over 0.1 sqrt(r³/GM), and the radius where; null when no node is near. */
  readonly coarsest: { readonly ratio: number; readonly spacingS: number; readonly radiusKm: number } | null;
  readonly leaveOneOutKm: number | null;
  /** Median of |Δr/Δt| over the mean speed: 1 when velocities belong to the positions; null with nothing to compare. */
  readonly medianSpeedRatio: number | null;
}

/** How well the nodes of a text ephemeris carry the path between them. */
export function checkNodes(planet: Planet, pieces: readonly NodePiece[]): NodeReport {
  const nearKm = NEAR_PLANET_RADII * planet.equatorialRadiusKm;
  let nearCount = 0;
  let shortest = Number.POSITIVE_INFINITY;
  let longest = 0;
  let coarsest: NodeReport['coarsest'] = null;
  const ratios: number[] = [];
  const near: { piece: NodePiece; node: number }[] = [];
  const total = pieces.reduce((sum, piece) => sum + piece.segment.epochsTdbS.length, 0);
  const stride = Math.ceil(total / 20_000);
  for (const piece of pieces) {
    const { epochsTdbS, states } = piece.segment;
    const last = epochsTdbS.length - 1;
    for (let i = 0; i < last; i++) {
      const spacing = epochsTdbS[i + 1] - epochsTdbS[i];
      if (i % stride === 0) ratios.push(speedRatio(states, i, spacing));
      const radius = Math.min(radiusAt(states, i), radiusAt(states, i + 1));
      if (!(radius < nearKm)) continue;
      nearCount++;
      shortest = Math.min(shortest, spacing);
      longest = Math.max(longest, spacing);
      const ratio = spacing / (COARSE_SHARE * Math.sqrt(radius ** 3 / planet.gmKm3S2));
      if (coarsest === null || ratio > coarsest.ratio) coarsest = { ratio, spacingS: spacing, radiusKm: radius };
      if (i > 0) near.push({ piece, node: i });
    }
  }
  ratios.sort((a, b) => a - b);
  return {
    nearCount,
    spacingS: nearCount === 0 ? null : [shortest, longest],
    coarsest,
    leaveOneOutKm: leaveOneOut(near),
    medianSpeedRatio: ratios.length === 0 ? null : ratios[ratios.length >> 1],
  };
}

/** Whether positions and velocities disagree as if they had different units or axes. */
export function velocitiesInconsistent(report: NodeReport): boolean {
  const ratio = report.medianSpeedRatio;
  // Curvature makes |Δr/Δt| fall short of the speed when nodes are coarse; that is the spacing's notice, not this one.
  if (ratio === null || (report.coarsest !== null && report.coarsest.ratio > 3)) return false;
  return Math.abs(ratio - 1) > VELOCITY_MISMATCH;
}

function radiusAt(states: Float64Array, node: number): number {
  const at = 6 * node;
  return Math.sqrt(states[at] ** 2 + states[at + 1] ** 2 + states[at + 2] ** 2);
}

function speedRatio(states: Float64Array, node: number, spacingS: number): number {
  const at = 6 * node;
  const chord = Math.hypot(
    states[at + 6] - states[at],
    states[at + 7] - states[at + 1],
    states[at + 8] - states[at + 2],
  );
  const mean = Math.hypot(
    states[at + 3] + states[at + 9],
    states[at + 4] + states[at + 10],
    states[at + 5] + states[at + 11],
  );
  return (2 * chord) / spacingS / mean;
}

/** Largest distance between a node and the curve of the same kind through its neighbours, km; a sample of all nodes. */
function leaveOneOut(near: readonly { piece: NodePiece; node: number }[]): number | null {
  const stride = Math.max(1, Math.ceil(near.length / MAX_LEFT_OUT));
  let worst: number | null = null;
  for (let i = 0; i < near.length; i += stride) {
    const { piece, node } = near[i];
    const error = leftOutErrorKm(piece.interpolator, node);
    if (error !== null && (worst === null || error > worst)) worst = error;
  }
  return worst;
}

function leftOutErrorKm(interpolator: NodeInterpolator, node: number): number | null {
  const { epochsTdbS, states, hermite } = interpolator;
  const count = epochsTdbS.length;
  const size = Math.min(interpolator.size, count - 1);
  if (size < 2) return null;
  // `size` neighbours, half on each side where there are as many.
  const first = Math.max(0, Math.min(count - 1 - size, node - Math.floor(size / 2)));
  const times = new Float64Array(size);
  const data = new Float64Array(6 * size);
  for (let j = 0; j < size; j++) {
    const source = first + j < node ? first + j : first + j + 1;
    times[j] = epochsTdbS[source];
    data.set(states.subarray(6 * source, 6 * source + 6), 6 * j);
  }
  const window = new PolynomialWindow(hermite ? 2 * size : size, hermite ? 3 : 6);
  const out = new Float64Array(6);
  if (hermite) window.fitHermite(size, times, 0, data, 0, 6, 3);
  else window.fitLagrange(size, times, 0, data, 0, 6);
  window.evaluateInto(epochsTdbS[node], out, 0, hermite ? 3 : -1);
  const at = 6 * node;
  return Math.hypot(out[0] - states[at], out[1] - states[at + 1], out[2] - states[at + 2]);
}
