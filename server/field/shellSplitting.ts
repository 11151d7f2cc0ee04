import { bLossNtAt, lossCurve } from './lossCurve.ts';
import { makeLineSegment, SegmentTracer } from './tracer.ts';
import type { FieldModel } from './types.ts';

/** How L at one point depends on the pitch angle, and the error of ln L that comes of giving the point one L. */
export interface ShellSplitting {
  /** L of the locally mirroring particle: the one L that is used. */
  readonly lShell: number;
  /** Local pitch angles, degrees, from 90 down to the loss cone, and the L of each. */
  readonly pitchAngleDeg: readonly number[];
  readonly lShellAt: readonly number[];
  /** Largest |ln(L(α)/L(90°))| over the trapped pitch angles. */
  readonly lnLSpread: number;
  /** Root mean square of ln(L(α)/L(90°)) weighted by solid angle, sin α dα, outside the loss cone. */
  readonly lnLRms: number;
}

const PITCH_ANGLES = 9;

/**
 * L of the particles of other pitch angles through a point: B_m = |B(P)|/sin²α up to B_loss, each with its own I on the
 * same line. In a dipole all are equal; in a multipole field the shells part ("shell splitting").
 *
 * @param point - reference radii, body-fixed
 * @returns null where the locally mirroring particle is not trapped
 * @source Roederer (1970), Dynamics of Geomagnetically Trapped Radiation, section III.4
 */
export function shellSplitting(model: FieldModel, point: readonly [number, number, number]): ShellSplitting | null {
  const tracer = new SegmentTracer(model);
  const segment = tracer.segmentInto(...point, 1, makeLineSegment());
  const { lShell, bNt } = segment;
  if (segment.end !== 'closed' || Number.isNaN(lShell) || segment.belowSurface) return null;
  const bLossNt = bLossNtAt(lossCurve(model), lShell);
  if (bNt >= bLossNt) return null;
  // Nodes even in cos α, which is even in solid angle.
  const edge = Math.sqrt(1 - bNt / bLossNt);
  const pitchAngleDeg: number[] = [];
  const lShellAt: number[] = [];
  let lnLSpread = 0;
  let squares = 0;
  for (let i = 0; i < PITCH_ANGLES; i++) {
    const cosine = (edge * i) / (PITCH_ANGLES - 1);
    tracer.segmentInto(...point, 1 / (1 - cosine * cosine), segment);
    // Drift-shell clearance was judged with the one L; on its own line a particle may still meet the planet.
    if (segment.end !== 'closed' || Number.isNaN(segment.lShell) || segment.belowSurface) break;
    const lnL = Math.log(segment.lShell / lShell);
    pitchAngleDeg.push((Math.acos(cosine) * 180) / Math.PI);
    lShellAt.push(segment.lShell);
    lnLSpread = Math.max(lnLSpread, Math.abs(lnL));
    squares += lnL * lnL;
  }
  return { lShell, pitchAngleDeg, lShellAt, lnLSpread, lnLRms: Math.sqrt(squares / lShellAt.length) };
}
