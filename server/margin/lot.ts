/**
 * What a tested lot says about the next device: log-normal failure doses, the one-sided tolerance limit that a
 * capability is taken from, and the predictive distribution that sampling draws from.
 *
 * The limit already holds the scatter of the lot; drawing devices from it again would count the scatter twice. So
 * margins use the limit and probabilities use the predictive distribution.
 */
import { AppError } from '../errors.ts';
import { bisect, noncentralTCdf, normalQuantile, studentTQuantile } from '../numeric/distributions.ts';
import type { LotStatistics } from './result.ts';

export const DEFAULT_LOT_CONFIDENCE = 0.9;
export const DEFAULT_LOT_PROBABILITY = 0.99;

/**
 * One-sided normal tolerance factor K_TL(n, C, P): with confidence C at least the share P of a normal population lies
 * above mean − K_TL s of a sample of n.
 *
 * K_TL = t_{n−1, z_P √n}^{-1}(C) / √n, the exact quantile of the noncentral t distribution, no approximation.
 * Valid: 2 ≤ n ≤ 1000, 0.5 ≤ C ≤ 0.9999, 0.5 ≤ P ≤ 0.9999. Accuracy: 4 decimals of the check table.
 *
 * @source G.J. Resnikoff & G.J. Lieberman (1957), Tables of the Non-Central t-Distribution; the use for failure doses
 *   follows MIL-HDBK-814.
 */
export function toleranceFactor(sampleSize: number, confidence: number, probability: number): number {
  if (!Number.isInteger(sampleSize) || sampleSize < 2 || sampleSize > 1000) {
    throw new TypeError(`sampleSize must be an integer from 2 to 1000, got ${sampleSize}`);
  }
  for (const [name, value] of [['confidence', confidence] as const, ['probability', probability] as const]) {
    if (!(value >= 0.5 && value <= 0.9999)) throw new TypeError(`${name} must be 0.5 to 0.9999, got ${value}`);
  }
  const root = Math.sqrt(sampleSize);
  const delta = normalQuantile(probability) * root;
  const t = Math.exp(
    bisect((lnT) => noncentralTCdf(Math.exp(lnT), sampleSize - 1, delta) - confidence, Math.log(1e-6), Math.log(1e7)),
  );
  return t / root;
}

/** Devices that must all survive to show, with confidence C, that at least the share P survives: ln(1−C)/ln P, up. */
export function zeroFailureSampleSize(confidence: number, probability: number): number {
  return Math.ceil(Math.log1p(-confidence) / Math.log(probability) - 1e-12);
}

interface LotCapability extends LotStatistics {
  /** exp(mean ln D − K_TL s), krad(Si). */
  readonly limitKradSi: number;
}

/**
 * Capability of a lot from the failure dose of each tested device.
 *
 * @param failureDosesKradSi - at least 2 values, krad(Si), > 0
 * @throws {AppError} PART_INVALID when there are fewer than two doses or one is not a positive number
 */
export function lotCapability(
  failureDosesKradSi: readonly number[],
  confidence: number = DEFAULT_LOT_CONFIDENCE,
  probability: number = DEFAULT_LOT_PROBABILITY,
): LotCapability {
  const n = failureDosesKradSi.length;
  if (n < 2 || failureDosesKradSi.some((dose) => !(Number.isFinite(dose) && dose > 0))) {
    throw new AppError(
      'PART_INVALID',
      `Lot statistics need at least 2 failure doses, each above 0 krad(Si); got [${failureDosesKradSi.join(', ')}].`,
    );
  }
  const logs = failureDosesKradSi.map(Math.log);
  const mean = logs.reduce((sum, value) => sum + value, 0) / n;
  const lnSd = Math.sqrt(logs.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (n - 1));
  const factor = cachedToleranceFactor(n, confidence, probability);
  return {
    sampleSize: n,
    geometricMeanKradSi: Math.exp(mean),
    lnSd,
    confidence,
    probability,
    toleranceFactor: factor,
    limitKradSi: Math.exp(mean - factor * lnSd),
  };
}

/**
 * Equal-probability points of the failure dose of the next device: ln D = mean + s √(1 + 1/n) T_{n−1}.
 *
 * @returns shape (count,), krad(Si), ascending: the quantiles at (k + ½)/count
 */
export function predictivePoints(lot: LotStatistics, count: number): Float64Array {
  const quantiles = cachedTQuantiles(lot.sampleSize - 1, count);
  const scale = lot.lnSd * Math.sqrt(1 + 1 / lot.sampleSize);
  return Float64Array.from(quantiles, (t) => lot.geometricMeanKradSi * Math.exp(scale * t));
}

// Pure functions of a few numbers that a parts list asks for again and again.
const factors = new Map<string, number>();
const tQuantiles = new Map<string, Float64Array>();

function cachedToleranceFactor(n: number, confidence: number, probability: number): number {
  const key = `${n} ${confidence} ${probability}`;
  let value = factors.get(key);
  if (value === undefined) {
    value = toleranceFactor(n, confidence, probability);
    factors.set(key, value);
  }
  return value;
}

function cachedTQuantiles(degrees: number, count: number): Float64Array {
  const key = `${degrees} ${count}`;
  let value = tQuantiles.get(key);
  if (value === undefined) {
    value = new Float64Array(count);
    for (let k = 0; k < count; k++) value[k] = studentTQuantile((k + 0.5) / count, degrees);
    tQuantiles.set(key, value);
  }
  return value;
}
