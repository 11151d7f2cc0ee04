/** Dose against depth: from responses for any fluence, and read off a table that someone else computed. */
import { AppError } from '../errors.ts';
import { foldDose } from './fold.ts';
import type { DoseDepthTable, FluenceSpectra } from './types.ts';

export interface DoseDepthCurve {
  readonly depthsMm: readonly number[];
  readonly electronGy: Float64Array;
  readonly bremsstrahlungGy: Float64Array;
  readonly protonGy: Float64Array;
  readonly totalGy: Float64Array;
  /** 1 σ statistical error of `totalGy`. */
  readonly sigmaGy: Float64Array;
}

/** Dose at every depth of a table: the product of its response matrix with one fluence. */
export function doseDepthCurve(spectra: FluenceSpectra, table: DoseDepthTable): DoseDepthCurve {
  const n = table.depthsMm.length;
  const curve = {
    depthsMm: table.depthsMm,
    electronGy: new Float64Array(n),
    bremsstrahlungGy: new Float64Array(n),
    protonGy: new Float64Array(n),
    totalGy: new Float64Array(n),
    sigmaGy: new Float64Array(n),
  };
  for (let i = 0; i < n; i++) {
    const dose = foldDose(spectra, table.responses[i]);
    curve.electronGy[i] = dose.electronGy;
    curve.bremsstrahlungGy[i] = dose.bremsstrahlungGy;
    curve.protonGy[i] = dose.protonGy;
    curve.totalGy[i] = dose.totalGy;
    curve.sigmaGy[i] = dose.sigmaGy;
  }
  return curve;
}

/**
 * Reads a dose-depth table log-log between its depths.
 *
 * @param depthsMm - ascending, > 0
 * @param doses - > 0, any unit, returned in the same
 * @throws {AppError} DOSE_DEPTH_OUTSIDE_SPAN when the depth is not inside the table
 */
export function readDoseDepth(depthsMm: readonly number[], doses: readonly number[], depthMm: number): number {
  const last = depthsMm.length - 1;
  if (!(depthMm >= depthsMm[0] && depthMm <= depthsMm[last])) {
    throw new AppError(
      'DOSE_DEPTH_OUTSIDE_SPAN',
      `The dose-depth table spans ${depthsMm[0]} to ${depthsMm[last]} mm; ${depthMm} mm lies outside and is not extrapolated.`,
      [{ field: 'depthMm', detail: 'outside the table', got: depthMm, limit: depthsMm[last], unit: 'mm' }],
    );
  }
  let low = 0;
  let high = last;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (depthsMm[middle] <= depthMm) low = middle;
    else high = middle;
  }
  const fraction = Math.log(depthMm / depthsMm[low]) / Math.log(depthsMm[high] / depthsMm[low]);
  return doses[low] * (doses[high] / doses[low]) ** fraction;
}

/** The rows of a table between two depths, ends included: a curve need not show all that was computed. */
export function depthsWithin(table: DoseDepthTable, fromMm: number, toMm: number): DoseDepthTable {
  const kept = table.depthsMm.flatMap((depthMm, i) => (depthMm >= fromMm && depthMm <= toMm ? [i] : []));
  return {
    ...table,
    depthsMm: kept.map((i) => table.depthsMm[i]),
    responses: kept.map((i) => table.responses[i]),
  };
}
