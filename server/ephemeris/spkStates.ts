import type { DafFile, SpkSummary } from './daf.ts';
import { MAX_DEGREE } from './metadata.ts';
import { PolynomialWindow, windowStart } from './polynomial.ts';
import {
  contradiction,
  lastNotAfter,
  requireWords,
  requireWordsWithDirectory,
  type SegmentEvaluator,
  tail,
  wholeCount,
} from './spkRecords.ts';
import { propagateInto } from './twoBody.ts';

/** How the states of one segment lie in its words. */
interface StateTable {
  readonly count: number;
  /** Words per state. */
  readonly size: number;
  /** Address of the first epoch, or 0 for equal steps. */
  readonly epochs: number;
  readonly initialTdbS: number;
  readonly stepS: number;
}

function epochAt(daf: DafFile, table: StateTable, index: number): number {
  return table.epochs === 0 ? table.initialTdbS + index * table.stepS : daf.word(table.epochs + index);
}

/** Largest index with epoch ≤ t, from 0 to `count` − 2, or 0 for a single state. */
function intervalAt(daf: DafFile, table: StateTable, t: number): number {
  const last = Math.max(0, table.count - 2);
  if (table.epochs !== 0) return Math.min(last, lastNotAfter(daf, table.epochs, table.count, t));
  return Math.max(0, Math.min(last, Math.floor((t - table.initialTdbS) / table.stepS)));
}

/**
 * SPK type 5: discrete states; between two of them both are carried by two-body motion and blended with
 * w = ½ + ½ cos π(t − t₁)/(t₂ − t₁); the velocity includes the change of w.
 *
 * @source NAIF required reading on SPK, type 5
 */
export function openTwoBodyStates(daf: DafFile, summary: SpkSummary): SegmentEvaluator {
  const [gmKm3S2, countWord] = tail(daf, summary, 2);
  const count = wholeCount(summary, countWord, 1, 2 ** 31, 'its number of states');
  requireWordsWithDirectory(summary, 7 * count + 2, count);
  if (!(gmKm3S2 > 0)) throw contradiction(summary, `its gravitational parameter is ${gmKm3S2}`);
  const table: StateTable = { count, size: 6, epochs: summary.first + 6 * count, initialTdbS: 0, stepS: 0 };
  const states = new Float64Array(12);
  const before = new Float64Array(6);
  const after = new Float64Array(6);
  let loaded = -1;
  let t1 = Number.NaN;
  let t2 = Number.NaN;
  return {
    method: 'two-body motion between states (SPK type 5)',
    degree: null,
    count,
    stateInto(epochTdbS, out) {
      if (!(epochTdbS >= t1 && epochTdbS < t2)) {
        const interval = intervalAt(daf, table, epochTdbS);
        if (interval !== loaded) {
          daf.wordsInto(summary.first + 6 * interval, count === 1 ? 6 : 12, states, 0);
          loaded = interval;
          t1 = epochAt(daf, table, interval);
          t2 = count === 1 ? t1 : epochAt(daf, table, interval + 1);
        }
      }
      let good: boolean;
      if (epochTdbS <= t1 || count === 1) {
        good = propagateInto(gmKm3S2, states, 0, epochTdbS - t1, out);
      } else if (epochTdbS >= t2) {
        good = propagateInto(gmKm3S2, states, 6, epochTdbS - t2, out);
      } else {
        good =
          propagateInto(gmKm3S2, states, 0, epochTdbS - t1, before) &&
          propagateInto(gmKm3S2, states, 6, epochTdbS - t2, after);
        const phase = (Math.PI * (epochTdbS - t1)) / (t2 - t1);
        const weight = 0.5 + 0.5 * Math.cos(phase);
        const weightRate = (-0.5 * Math.PI * Math.sin(phase)) / (t2 - t1);
        for (let i = 0; i < 3; i++) {
          out[i] = weight * before[i] + (1 - weight) * after[i];
          out[3 + i] = weight * before[3 + i] + (1 - weight) * after[3 + i] + weightRate * (before[i] - after[i]);
        }
      }
      if (!good) throw contradiction(summary, 'its states follow no two-body orbit');
    },
  };
}

/**
 * SPK types 8, 9 (Lagrange), 12, 13 (Hermite) and 18 (either): polynomials through a window of states.
 *
 * @source NAIF required reading on SPK, types 8, 9, 12, 13 and 18
 */
export function openPolynomialStates(daf: DafFile, summary: SpkSummary): SegmentEvaluator {
  const { table, window, hermite, split } = layoutOf(daf, summary);
  const { count, size } = table;
  const used = Math.min(window, count);
  if (used < 2) throw contradiction(summary, 'it has a single state, which is no path');
  const times = new Float64Array(used);
  const states = new Float64Array(used * size);
  // Split packets (type 18, subtype 0) carry their own derivatives of position and of velocity.
  const position = hermite ? new PolynomialWindow(2 * used, 3) : new PolynomialWindow(used, 6);
  const velocity = split ? new PolynomialWindow(2 * used, 3) : null;
  let fitted = -1;
  let interval = -1;
  let from = Number.NaN;
  let to = Number.NaN;
  return {
    method: `${hermite ? 'Hermite' : 'Lagrange'} (SPK type ${summary.type})`,
    degree: hermite ? 2 * used - 1 : used - 1,
    count,
    stateInto(epochTdbS, out) {
      if (!(epochTdbS >= from && epochTdbS < to)) {
        interval = intervalAt(daf, table, epochTdbS);
        from = epochAt(daf, table, interval);
        to = epochAt(daf, table, interval + 1);
      }
      const start = windowStart(used, count, interval, epochTdbS - from > to - epochTdbS);
      if (start !== fitted) {
        if (table.epochs !== 0) daf.wordsInto(table.epochs + start, used, times, 0);
        else for (let i = 0; i < used; i++) times[i] = table.initialTdbS + (start + i) * table.stepS;
        for (let i = 1; i < used; i++) {
          if (!(times[i] > times[i - 1])) throw contradiction(summary, 'its epochs do not ascend');
        }
        daf.wordsInto(summary.first + start * size, used * size, states, 0);
        if (hermite) position.fitHermite(used, times, 0, states, 0, size, 3);
        else position.fitLagrange(used, times, 0, states, 0, size);
        velocity?.fitHermite(used, times, 0, states, 6, size, 3);
        fitted = start;
      }
      position.evaluateInto(epochTdbS, out, 0, hermite && !split ? 3 : -1);
      velocity?.evaluateInto(epochTdbS, out, 3, -1);
    },
  };
}

/** Counts and places of the five layouts, checked against the length of the segment. */
function layoutOf(
  daf: DafFile,
  summary: SpkSummary,
): { table: StateTable; window: number; hermite: boolean; split: boolean } {
  const { type, first } = summary;
  if (type === 8 || type === 12) {
    const [initialTdbS, stepS, sizeWord, countWord] = tail(daf, summary, 4);
    const count = wholeCount(summary, countWord, 2, 2 ** 31, 'its number of states');
    if (!(stepS > 0) || !Number.isFinite(initialTdbS)) throw contradiction(summary, `its step is ${stepS} s`);
    requireWords(summary, 6 * count + 4);
    const window = wholeCount(summary, sizeWord, 1, MAX_DEGREE, 'its window or degree') + 1;
    return { table: { count, size: 6, epochs: 0, initialTdbS, stepS }, window, hermite: type === 12, split: false };
  }
  if (type === 18) {
    const [subtypeWord, windowWord, countWord] = tail(daf, summary, 3);
    const subtype = wholeCount(summary, subtypeWord, 0, 1, 'its subtype');
    const window = wholeCount(summary, windowWord, 2, MAX_DEGREE + 1, 'its window');
    const count = wholeCount(summary, countWord, 2, 2 ** 31, 'its number of packets');
    const size = subtype === 0 ? 12 : 6;
    requireWordsWithDirectory(summary, (size + 1) * count + 3, count);
    const table = { count, size, epochs: first + size * count, initialTdbS: 0, stepS: 0 };
    return { table, window, hermite: subtype === 0, split: subtype === 0 };
  }
  const [sizeWord, countWord] = tail(daf, summary, 2);
  const count = wholeCount(summary, countWord, 2, 2 ** 31, 'its number of states');
  const window = wholeCount(summary, sizeWord, 1, MAX_DEGREE, 'its window or degree') + 1;
  requireWordsWithDirectory(summary, 7 * count + 2, count);
  const table = { count, size: 6, epochs: first + 6 * count, initialTdbS: 0, stepS: 0 };
  return { table, window, hermite: type === 13, split: false };
}
