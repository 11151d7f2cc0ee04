import type { DafFile, SpkSummary } from './daf.ts';
import { contradiction, requireWords, type SegmentEvaluator, tail, wholeCount } from './spkRecords.ts';

const MAX_COEFFICIENTS = 100;

/**
 * SPK types 2 and 3: Chebyshev polynomials over equal intervals, of the position (velocity by differentiation) or of
 * position and velocity.
 *
 * @source NAIF required reading on SPK, types 2 and 3; Clenshaw (1955), Math. Tables Aids Comput. 9, 118
 */
export function openChebyshev(daf: DafFile, summary: SpkSummary): SegmentEvaluator {
  const [initial, length, recordSize, recordCount] = tail(daf, summary, 4);
  const components = summary.type === 2 ? 3 : 6;
  const size = wholeCount(summary, recordSize, 2 + components, 2 + components * MAX_COEFFICIENTS, 'its record size');
  const perComponent = wholeCount(summary, (size - 2) / components, 1, MAX_COEFFICIENTS, 'its number of coefficients');
  const count = wholeCount(summary, recordCount, 1, 2 ** 31, 'its number of records');
  requireWords(summary, size * count + 4);
  if (!(length > 0) || !Number.isFinite(initial)) throw contradiction(summary, 'its intervals have no length');
  const record = new Float64Array(size);
  let loaded = -1;
  return {
    method: `Chebyshev polynomials (SPK type ${summary.type})`,
    degree: perComponent - 1,
    count,
    stateInto(epochTdbS, out) {
      const index = Math.max(0, Math.min(count - 1, Math.floor((epochTdbS - initial) / length)));
      if (index !== loaded) {
        daf.wordsInto(summary.first + index * size, size, record, 0);
        loaded = index;
      }
      const radius = record[1];
      const s = (epochTdbS - record[0]) / radius;
      for (let component = 0; component < 3; component++) {
        clenshawInto(record, 2 + component * perComponent, perComponent, s, out, component, components === 3);
      }
      if (components === 3) {
        for (let component = 3; component < 6; component++) out[component] /= radius;
      } else {
        for (let component = 3; component < 6; component++) {
          clenshawInto(record, 2 + component * perComponent, perComponent, s, out, component, false);
        }
      }
    },
  };
}

/** Σ c_k T_k(s) into out[at] and, with `slope`, its derivative to s into out[at + 3]. */
function clenshawInto(
  c: Float64Array,
  first: number,
  count: number,
  s: number,
  out: Float64Array,
  at: number,
  slope: boolean,
): void {
  let b1 = 0;
  let b2 = 0;
  let d1 = 0;
  let d2 = 0;
  const twice = 2 * s;
  for (let k = count - 1; k >= 1; k--) {
    if (slope) {
      const d = twice * d1 + 2 * b1 - d2;
      d2 = d1;
      d1 = d;
    }
    const b = twice * b1 - b2 + c[first + k];
    b2 = b1;
    b1 = b;
  }
  out[at] = s * b1 - b2 + c[first];
  if (slope) out[at + 3] = s * d1 + b1 - d2;
}
