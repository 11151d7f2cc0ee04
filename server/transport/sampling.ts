import { ELECTRON_REST_MEV } from '../matter/index.ts';
import type { Generator } from './generator.ts';

const COSINES = 1024;
const COSINE = Float64Array.from({ length: COSINES }, (_, i) => Math.cos((2 * Math.PI * (i + 0.5)) / COSINES));

/** Cosine of an azimuth, uniform: the middle of one of 1024 equal sectors, whose first two moments are exact. */
export function azimuthCosine(u: number): number {
  return COSINE[(u * COSINES) | 0];
}

const LOGS = 4096;
const LOG = Float64Array.from({ length: LOGS + 1 }, (_, i) => (i === 0 ? 0 : -Math.log(i / LOGS)));
/** Below this entry the logarithm bends too much for a straight line between entries. */
const LOG_EXACT = 64;

/** −ln u: by straight lines in a table, to 3e-5; where u is small, exactly. */
export function exponential(u: number): number {
  const place = u * LOGS;
  const k = place | 0;
  return k < LOG_EXACT ? -Math.log(u) : LOG[k] + (place - k) * (LOG[k + 1] - LOG[k]);
}

/** Direction cosine after a turn by `cosine`, azimuth given by its cosine. */
export function turned(w: number, cosine: number, azimuth: number): number {
  const sines = (1 - w * w) * (1 - cosine * cosine);
  const next = sines > 0 ? w * cosine + Math.sqrt(sines) * azimuth : w * cosine;
  return next > 1 ? 1 : next < -1 ? -1 : next;
}

/** Loss of given mean and variance: uniform, or uniform with a part at zero where the spread exceeds the mean. */
export function straggled(mean: number, variance: number, u: number): number {
  const mean2 = mean * mean;
  if (mean2 > 3 * variance) return mean + Math.sqrt(3 * variance) * (2 * u - 1);
  const none = (3 * variance - mean2) / (3 * variance + 3 * mean2);
  if (u < none) return 0;
  return (((u - none) / (1 - none)) * (3 * variance + 3 * mean2)) / (2 * mean);
}

/**
 * (1 − cos θ)/2 of a step whose soft deflections have the mean numbers t1 = s/λ1 and t2 = s/λ2: two uniform
 * distributions side by side that carry the first two moments.
 */
export function hingeAngle(t1: number, t2: number, u: number, v: number): number {
  const mean = 0.5 * lostShare(t1);
  const square = mean - lostShare(t2) / 6;
  const split = (2 * mean - 3 * square) / (1 - 2 * mean);
  const lower = 1 - 2 * mean + split;
  return u < lower ? v * split : split + v * (1 - split);
}

/** 1 − exp(−t); below 0.6 by its Padé approximant [2/2], to 1e-4 of itself. */
function lostShare(t: number): number {
  return t < 0.6 ? (12 * t) / (12 + t * (6 + t)) : -Math.expm1(-t);
}

/** Share of the energy that a Møller collision gives to the slower electron, from `cut` to one half. */
export function mollerShare(energy: number, cut: number, generator: Generator): number {
  const gamma = 1 + energy / ELECTRON_REST_MEV;
  const a = ((gamma - 1) / gamma) ** 2;
  const b = (2 * gamma - 1) / (gamma * gamma);
  const top = Math.max(1, 2 + a / 4 - b);
  for (;;) {
    const e = cut / (1 - generator.next() * (1 - 2 * cut));
    const rest = e / (1 - e);
    if (generator.next() * top < 1 + rest * rest + a * e * e - b * rest) return e;
  }
}

/** Cosine of a K-shell photoelectron to its photon. */
export function sauterCosine(energy: number, generator: Generator): number {
  const gamma = 1 + energy / ELECTRON_REST_MEV;
  const beta = Math.sqrt(1 - 1 / (gamma * gamma));
  const a = 1 / beta - 1;
  const half = 0.5 * beta * gamma * (gamma - 1) * (gamma - 2);
  const top = 2 * (1 / a + half);
  for (;;) {
    const u = generator.next();
    const t = ((2 * a) / ((a + 2) ** 2 - 4 * u)) * (2 * u + (a + 2) * Math.sqrt(u));
    if (generator.next() * top < (2 - t) * (1 / (a + t) + half)) return 1 - t;
  }
}

/** Energy of a Compton photon over that of its parent, off a free electron at rest. */
export function comptonRatio(energy: number, generator: Generator): number {
  const k = energy / ELECTRON_REST_MEV;
  const low = 1 / (1 + 2 * k);
  const logPart = -Math.log(low);
  const flatPart = 0.5 * (1 - low * low);
  for (;;) {
    const ratio =
      generator.next() * (logPart + flatPart) < logPart
        ? low ** generator.next()
        : Math.sqrt(low * low + (1 - low * low) * generator.next());
    const t = (1 - ratio) / (k * ratio);
    if (generator.next() < 1 - (ratio * t * (2 - t)) / (1 + ratio * ratio)) return ratio;
  }
}

/** Cosine of a bremsstrahlung photon or a pair particle to its parent, from the density (1 − β²)/2(1 − β cos θ)². */
export function dipoleCosine(beta: number, u: number): number {
  const z = 2 * u - 1;
  return (z + beta) / (z * beta + 1);
}

/** Speed over that of light. */
export function betaOf(energy: number): number {
  const inverse = 1 / (1 + energy / ELECTRON_REST_MEV);
  return Math.sqrt(1 - inverse * inverse);
}
