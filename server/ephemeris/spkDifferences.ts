import type { DafFile, SpkSummary } from './daf.ts';
import { requireWordsWithDirectory, type SegmentEvaluator, tail, wholeCount } from './spkRecords.ts';

const MAX_DIMENSION = 100;

/**
 * SPK types 1 and 21: modified difference arrays, the integrator's own record of a step. Type 1 holds 15 differences
 * per component, type 21 states their number.
 *
 * Record of dimension m: reference epoch, m step sizes, position and velocity interleaved, 3 × m differences, highest
 * order plus one, three orders. The record in force is the first whose epoch is not before the epoch asked for.
 *
 * @source NAIF required reading on SPK, types 1 and 21; Krogh (1972), Proc. Conf. Numerical Solution of ODEs, Austin
 */
export function openDifferences(daf: DafFile, summary: SpkSummary): SegmentEvaluator {
  const [dimensionWord, countWord] = tail(daf, summary, 2);
  const dimension =
    summary.type === 1 ? 15 : wholeCount(summary, dimensionWord, 1, MAX_DIMENSION, 'its number of differences');
  const count = wholeCount(summary, countWord, 1, 2 ** 31, 'its number of records');
  const size = 4 * dimension + 11;
  requireWordsWithDirectory(summary, count * (size + 1) + (summary.type === 1 ? 1 : 2), count);
  const epochs = summary.first + count * size;
  const line = new DifferenceLine(summary, dimension);
  let loaded = -1;
  let after = 0;
  let until = 0;
  return {
    method: `modified difference arrays (SPK type ${summary.type})`,
    degree: null,
    count,
    stateInto(epochTdbS, out) {
      if (loaded < 0 || !(epochTdbS > after && epochTdbS <= until)) {
        loaded = firstNotBefore(daf, epochs, count, epochTdbS);
        daf.wordsInto(summary.first + loaded * size, size, line.record, 0);
        line.prepare();
        after = loaded === 0 ? Number.NEGATIVE_INFINITY : daf.word(epochs + loaded - 1);
        until = loaded === count - 1 ? Number.POSITIVE_INFINITY : daf.word(epochs + loaded);
      }
      line.stateInto(epochTdbS, out);
    },
  };
}

/** First index whose epoch is ≥ t, at most `count` − 1. */
function firstNotBefore(daf: DafFile, epochs: number, count: number, t: number): number {
  let low = 0;
  let high = count - 1;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (daf.word(epochs + middle) >= t) high = middle;
    else low = middle + 1;
  }
  return low;
}

/** One record and the recurrence that sums it. */
class DifferenceLine {
  readonly record: Float64Array;
  private readonly summary: SpkSummary;
  private readonly dimension: number;
  private readonly fc: Float64Array;
  private readonly wc: Float64Array;
  private readonly w: Float64Array;
  private orders = new Int32Array(3);
  private highest = 0;

  constructor(summary: SpkSummary, dimension: number) {
    this.summary = summary;
    this.dimension = dimension;
    this.record = new Float64Array(4 * dimension + 11);
    this.fc = new Float64Array(dimension + 2);
    this.wc = new Float64Array(dimension + 2);
    this.w = new Float64Array(2 * dimension + 4);
  }

  /** Checks the orders of a record just loaded: they index the arrays below. */
  prepare(): void {
    const { record, dimension, summary } = this;
    const at = 7 + 4 * dimension;
    this.highest = wholeCount(summary, record[at], 2, dimension + 1, 'the highest order of a record');
    for (let i = 0; i < 3; i++) {
      this.orders[i] = wholeCount(summary, record[at + 1 + i], 0, dimension, 'the order of a component');
    }
  }

  stateInto(epochTdbS: number, out: Float64Array): void {
    const { record, dimension, fc, wc, w, highest } = this;
    const delta = epochTdbS - record[0];
    // Ratios of the step to the sums of step sizes; fc[j], wc[j] as in the recurrence, from 1.
    let shifted = delta;
    for (let j = 1; j <= highest - 2; j++) {
      const step = record[j];
      fc[j + 1] = shifted / step;
      wc[j] = delta / step;
      shifted = delta + step;
    }
    fc[1] = 1;
    for (let j = 1; j <= highest; j++) w[j] = 1 / j;
    let ks = highest - 1;
    let jx = 0;
    while (ks >= 2) {
      jx++;
      for (let j = 1; j <= jx; j++) w[j + ks] = fc[j + 1] * w[j + ks - 1] - wc[j] * w[j + ks];
      ks--;
    }
    const differences = dimension + 7;
    for (let i = 0; i < 3; i++) {
      const row = differences + i * dimension;
      let sum = 0;
      for (let j = this.orders[i]; j >= 1; j--) sum += record[row + j - 1] * w[j + ks];
      out[i] = record[dimension + 1 + 2 * i] + delta * (record[dimension + 2 + 2 * i] + delta * sum);
    }
    for (let j = 1; j <= jx; j++) w[j + ks] = fc[j + 1] * w[j + ks - 1] - wc[j] * w[j + ks];
    ks--;
    for (let i = 0; i < 3; i++) {
      const row = differences + i * dimension;
      let sum = 0;
      for (let j = this.orders[i]; j >= 1; j--) sum += record[row + j - 1] * w[j + ks];
      out[3 + i] = record[dimension + 2 + 2 * i] + delta * sum;
    }
  }
}
