import {
  type Material,
  moliereScreening,
  mottCoefficientsInto,
  mottRatio,
  rutherfordStrength,
} from '../matter/index.ts';
import { ELASTIC_QUANTILES, quantileShare } from './layout.ts';

/** Steps of the angular integrals, equal in ln(1 + μ/A). */
const STEPS = 256;
/** Share of the transport mean free path up to which hard collisions are drawn together. */
const HARD_SHARE = 0.2;

export interface ElasticRow {
  /** Hard collisions per g/cm². */
  hard: number;
  /** Soft inverse transport mean free paths of first and second order, cm²/g. */
  soft1: number;
  soft2: number;
  /** All collisions: inverse first transport mean free path, cm²/g. */
  transport1: number;
  /** Screening that the quantiles refer to. */
  screening: number;
}

const mottC = new Float64Array(6);
const cumulative = new Float64Array(STEPS + 1);
const first = new Float64Array(STEPS + 1);
const second = new Float64Array(STEPS + 1);
const density = new Float64Array(2 * STEPS + 1);

/**
 * Elastic scattering of a material at one energy, split at the angle beyond which collisions are drawn one by one: their
 * mean free path is the larger of the true one and a tenth of the transport mean free path.
 *
 * @param quantiles - shape (ELASTIC_QUANTILES,), of 1/(μ + screening) over the hard collisions, ascending in μ
 */
export function elasticRow(of: Material, energyMeV: number, quantiles: Float64Array): ElasticRow {
  let a = Number.POSITIVE_INFINITY;
  for (const { z } of of.constituents) a = Math.min(a, moliereScreening(z, energyMeV));
  const top = Math.log1p(1 / a);
  const h = top / STEPS;
  density.fill(0);
  for (const { z, atomicMassGPerMol, massFraction } of of.constituents) {
    mottCoefficientsInto(z, energyMeV, mottC);
    const own = moliereScreening(z, energyMeV);
    const strength = massFraction * rutherfordStrength(z, atomicMassGPerMol, energyMeV);
    for (let j = 0; j <= 2 * STEPS; j++) {
      const grown = Math.exp((j * h) / 2);
      const mu = a * (grown - 1);
      density[j] += (strength * mottRatio(mottC, 2 * Math.min(1, mu)) * a * grown) / (mu + own) ** 2;
    }
  }
  cumulative[0] = 0;
  first[0] = 0;
  second[0] = 0;
  for (let j = 0; j < STEPS; j++) {
    let s0 = 0;
    let s1 = 0;
    let s2 = 0;
    for (let k = 0; k < 3; k++) {
      const weight = (k === 1 ? 4 : 1) * (h / 6) * density[2 * j + k];
      const mu = a * Math.expm1(((2 * j + k) * h) / 2);
      s0 += weight;
      s1 += weight * 2 * mu;
      s2 += weight * 6 * mu * (1 - mu);
    }
    cumulative[j + 1] = cumulative[j] + s0;
    first[j + 1] = first[j] + s1;
    second[j + 1] = second[j] + s2;
  }
  const total = cumulative[STEPS];
  const hard = Math.min(total, first[STEPS] / HARD_SHARE);
  let j = 0;
  while (j < STEPS - 1 && cumulative[j + 1] < total - hard) j += 1;
  const share = (total - hard - cumulative[j]) / (cumulative[j + 1] - cumulative[j]);
  const soft1 = first[j] + share * (first[j + 1] - first[j]);
  const soft2 = second[j] + share * (second[j + 1] - second[j]);
  for (let q = 0; q < ELASTIC_QUANTILES; q++) {
    const target = total - hard + hard * quantileShare(q);
    while (j < STEPS - 1 && cumulative[j + 1] < target) j += 1;
    const within = Math.min(1, (target - cumulative[j]) / (cumulative[j + 1] - cumulative[j]));
    const low = 1 / (a * Math.exp(j * h));
    const high = 1 / (a * Math.exp((j + 1) * h));
    quantiles[q] = low + within * (high - low);
  }
  return { hard, soft1: Math.max(0, soft1), soft2: Math.max(0, soft2), transport1: first[STEPS], screening: a };
}
