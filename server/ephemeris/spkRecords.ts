import { type DafFile, type SpkSummary, spkInvalid } from './daf.ts';

/** State of a segment's target relative to its centre, km and km/s, in the segment's own axes. */
export interface SegmentEvaluator {
  /** What evaluates it, for the reading. */
  readonly method: string;
  readonly degree: number | null;
  /** Records or states in the segment. */
  readonly count: number;
  stateInto(epochTdbS: number, out: Float64Array): void;
}

/** Last `count` words of a segment. */
export function tail(daf: DafFile, summary: SpkSummary, count: number): Float64Array {
  const out = new Float64Array(count);
  if (summary.last - summary.first + 1 < count) throw contradiction(summary, 'it is shorter than its own directory');
  daf.wordsInto(summary.last - count + 1, count, out, 0);
  return out;
}

export function contradiction(summary: SpkSummary, why: string): Error {
  return spkInvalid(
    `Segment "${summary.name}" of body ${summary.target} (SPK type ${summary.type}) contradicts itself: ${why}.`,
  );
}

/** A count stored as a double: whole and in range, or the segment is damaged. */
export function wholeCount(summary: SpkSummary, value: number, low: number, high: number, what: string): number {
  if (!(Number.isInteger(value) && value >= low && value <= high)) {
    throw contradiction(summary, `${what} is ${value}, which is not a whole number from ${low} to ${high}`);
  }
  return value;
}

/** The segment must be as long as its counts say. */
export function requireWords(summary: SpkSummary, expected: number): void {
  const words = summary.last - summary.first + 1;
  if (words !== expected) throw contradiction(summary, `it has ${words} words where its counts need ${expected}`);
}

/**
 * The same for a segment with a directory of every hundredth epoch. Writers differ in whether the last epoch of a whole
 * hundred is listed, (count − 1)/100 or count/100 entries; the directory itself is not used, so both are accepted.
 *
 * @param others - words besides the directory
 */
export function requireWordsWithDirectory(summary: SpkSummary, others: number, count: number): void {
  const entries = summary.last - summary.first + 1 - others;
  if (entries === Math.floor((count - 1) / 100) || entries === Math.floor(count / 100)) return;
  requireWords(summary, others + Math.floor((count - 1) / 100));
}

/**
 * Largest index i < `count` with epoch[i] ≤ t, at least 0, by bisection over words of the file; `epochs` is the address
 * of the first epoch. The file's own directory of every hundredth epoch is not needed for it.
 */
export function lastNotAfter(daf: DafFile, epochs: number, count: number, t: number): number {
  let low = 0;
  let high = count;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (daf.word(epochs + middle) <= t) low = middle;
    else high = middle;
  }
  return low;
}
