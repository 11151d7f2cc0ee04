/** Order statistics of drawn doses. */
import { GY_PER_KRAD } from '../units.ts';

/** Ascending copy. */
export function sorted(values: Float64Array): Float64Array {
  return values.slice().sort();
}

/**
 * Percentile by linear interpolation between order statistics (definition 7 of Hyndman & Fan 1996).
 *
 * @param ascending - shape (n,), n ≥ 1
 * @param percent - 0 to 100
 */
export function percentile(ascending: Float64Array, percent: number): number {
  const position = (percent / 100) * (ascending.length - 1);
  const low = Math.floor(position);
  const high = Math.min(low + 1, ascending.length - 1);
  return ascending[low] + (position - low) * (ascending[high] - ascending[low]);
}

/** Share of the values that lie below a limit. */
export function shareBelow(ascending: Float64Array, limit: number): number {
  let low = 0;
  let high = ascending.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (ascending[middle] < limit) low = middle + 1;
    else high = middle;
  }
  return low / ascending.length;
}

/**
 * P(capability > factor × dose) with dose drawn and capability at points of equal probability, independent of it.
 *
 * The average over both is taken in full rather than by pairing them, so it carries only the noise of the doses.
 *
 * @param beltDosesGyAscending - shape (draws,), Gy
 * @param capabilityPointsKradSi - shape (m,), krad(Si)
 * @param otherKradSi - dose of the other sources, added to every draw, krad(Si)
 */
export function probabilityAbove(
  beltDosesGyAscending: Float64Array,
  capabilityPointsKradSi: Float64Array,
  factor: number,
  otherKradSi: number,
): number {
  let sum = 0;
  for (let k = 0; k < capabilityPointsKradSi.length; k++) {
    const limitGy = (capabilityPointsKradSi[k] / factor - otherKradSi) * GY_PER_KRAD;
    sum += shareBelow(beltDosesGyAscending, limitGy);
  }
  return sum / capabilityPointsKradSi.length;
}
