import { readReferenceJson } from '../constants/reference.ts';
import { ELECTRON_EDGES_MEV } from '../numeric/spectrumGrid.ts';
import type { EffortClass } from './types.ts';

const BINS = ELECTRON_EDGES_MEV.length - 1;

/** What an effort class asks for and allows. One unit of cost is a step of an electron or a flight of a photon. */
export interface EffortLimits {
  /** Relative standard error of the dose folded with each reference spectrum. */
  readonly errorRel: number;
  /** Histories of every bin before anything is known. */
  readonly pilot: number;
  readonly maxCost: number;
}

export const EFFORT: Readonly<Record<EffortClass, EffortLimits>> = {
  standard: { errorRel: 0.02, pilot: 300, maxCost: 3.2e8 },
  fine: { errorRel: 0.005, pilot: 1000, maxCost: 2.5e9 },
};

/** What is known of a response so far: per bin the histories, the mean and variance of a history's dose, and its cost. */
export interface Progress {
  readonly histories: Float64Array;
  readonly mean: Float64Array;
  readonly variance: Float64Array;
  readonly cost: Float64Array;
}

interface Reference {
  readonly version: number;
  readonly spectra: readonly { readonly name: string; readonly weights: readonly number[] }[];
}

const REFERENCE = readReferenceJson<Reference>('reference-spectra', 'electrons.json');

/** Version of the reference spectra, part of the address of a response. */
export const REFERENCE_VERSION = REFERENCE.version;

/** Largest relative standard error of the dose among the reference spectra; infinite where one gives no dose at all. */
export function worstReferenceError({ histories, mean, variance }: Progress): number {
  let worst = 0;
  for (const { weights } of REFERENCE.spectra) {
    let dose = 0;
    let square = 0;
    for (let b = 0; b < BINS; b++) {
      dose += weights[b] * mean[b];
      square += (weights[b] ** 2 * variance[b]) / histories[b];
    }
    worst = Math.max(worst, dose > 0 ? Math.sqrt(square) / dose : Number.POSITIVE_INFINITY);
  }
  return worst;
}

/** No round multiplies the histories of a bin by more: the variances it goes by are themselves estimates. */
const GROWTH = 8;
/** Asked of the variances in excess of what the errors need, against a last round of crumbs. */
const RESERVE = 1.15;

/**
 * Histories to add to each bin so that every reference spectrum meets the error at the least cost: for one spectrum of
 * weights w the optimum is n ∝ w σ/√c (Neyman allocation); a bin gets the most that any spectrum asks for.
 *
 * @returns shape (90,), whole numbers; all 0 when nothing is left to do or the cost allowed is used up
 */
export function histories(progress: Progress, limits: EffortLimits): Float64Array {
  const more = new Float64Array(BINS);
  const spread = neighbourly(progress.variance);
  const wanted = new Float64Array(BINS);
  for (const { weights } of REFERENCE.spectra) {
    let dose = 0;
    let square = 0;
    let sum = 0;
    for (let b = 0; b < BINS; b++) {
      dose += weights[b] * progress.mean[b];
      square += (weights[b] ** 2 * progress.variance[b]) / progress.histories[b];
      sum += weights[b] * Math.sqrt(spread[b] * progress.cost[b]);
    }
    if (dose === 0) {
      // Nothing seen yet: as many more of everything as a round allows.
      for (let b = 0; b < BINS; b++) if (weights[b] > 0) wanted[b] = GROWTH * progress.histories[b];
      continue;
    }
    if (Math.sqrt(square) <= limits.errorRel * dose) continue;
    const scale = (RESERVE * sum) / (limits.errorRel * dose) ** 2;
    for (let b = 0; b < BINS; b++) {
      wanted[b] = Math.max(wanted[b], scale * weights[b] * Math.sqrt(spread[b] / progress.cost[b]));
    }
  }
  let spent = 0;
  let asked = 0;
  for (let b = 0; b < BINS; b++) {
    const grown = Math.min(wanted[b], GROWTH * progress.histories[b]);
    more[b] = Math.max(0, Math.ceil(grown - progress.histories[b]));
    spent += progress.histories[b] * progress.cost[b];
    asked += more[b] * progress.cost[b];
  }
  const left = limits.maxCost - spent;
  if (left < MIN_ROUND_SHARE * limits.maxCost) return new Float64Array(BINS);
  if (asked > left) for (let b = 0; b < BINS; b++) more[b] = Math.floor((more[b] * left) / asked);
  return more;
}

/** A round worth less than this share of the cost allowed is not begun. */
const MIN_ROUND_SHARE = 0.01;

/** A bin that saw nothing rare yet has at least half the variance of its neighbours. */
function neighbourly(variance: Float64Array): Float64Array {
  return variance.map((own, b) => Math.max(own, 0.5 * (variance[b - 1] ?? 0), 0.5 * (variance[b + 1] ?? 0)));
}

/** Dose of every reference spectrum behind a response per bin, in its unit. */
export function referenceDoses(perBin: Float64Array): number[] {
  return REFERENCE.spectra.map(({ weights }) => perBin.reduce((sum, value, bin) => sum + weights[bin] * value, 0));
}

/** Variance of the dose of every reference spectrum from variances per bin, bins independent. */
export function referenceVariances(perBin: Float64Array): number[] {
  return REFERENCE.spectra.map(({ weights }) => perBin.reduce((sum, value, bin) => sum + weights[bin] ** 2 * value, 0));
}
