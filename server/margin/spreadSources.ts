/** Which of the uncertain things makes most of the spread of a dose. */
import type { BeltDraws } from './beltDraws.ts';
import { FACTORS_PER_DRAW, FACTORS_PER_SPECIES } from './beltDraws.ts';
import type { DrawRecord } from './caseSampler.ts';
import type { UncertaintyShare } from './result.ts';

/** Shares are read to two digits; this many draws give them that. */
const SHARE_DRAWS = 2000;

/**
 * Shares of the variance of ln dose by source.
 *
 * All inputs are drawn independently, so a source's share is the squared correlation of ln dose with its deviate, or,
 * where it picks one of several (field model, phase of a single flight), the variance between those groups with the
 * bias of the group means taken off. What no source explains alone (products of them) is spread in proportion, so the
 * shares sum to 1.
 *
 * @param dosesGy - shape (draws,), in order of the draws, without constant parts
 * @returns largest first; empty when the dose does not vary
 */
export function spreadSources(
  dosesGy: Float64Array,
  belts: readonly BeltDraws[],
  record: DrawRecord,
  errorDeviates: Float64Array | null,
): UncertaintyShare[] {
  const y: number[] = [];
  const at: number[] = [];
  for (let draw = 0; draw < Math.min(dosesGy.length, SHARE_DRAWS); draw++) {
    if (dosesGy[draw] > 0) {
      y.push(Math.log(dosesGy[draw]));
      at.push(draw);
    }
  }
  const n = y.length;
  if (n < 30) return [];
  const mean = y.reduce((sum, value) => sum + value, 0) / n;
  for (let i = 0; i < n; i++) y[i] -= mean;
  const variance = y.reduce((sum, value) => sum + value * value, 0);
  if (!(variance > 1e-20 * n)) return [];

  const correlation = (x: (draw: number) => number): number => {
    let sx = 0;
    let sxx = 0;
    let sxy = 0;
    for (let i = 0; i < n; i++) {
      const value = x(at[i]);
      sx += value;
      sxx += value * value;
      sxy += value * y[i];
    }
    const spread = sxx - (sx * sx) / n;
    // One deviate explains 1/n of any variance by chance.
    return spread > 0 ? Math.max(0, (sxy * sxy) / (spread * variance) - 1 / n) : 0;
  };
  const between = (group: (draw: number) => number): number => {
    const sums = new Map<number, [count: number, sum: number]>();
    for (let i = 0; i < n; i++) {
      const key = group(at[i]);
      const entry = sums.get(key);
      if (entry === undefined) sums.set(key, [1, y[i]]);
      else {
        entry[0]++;
        entry[1] += y[i];
      }
    }
    let explained = 0;
    for (const [count, sum] of sums.values()) explained += (sum * sum) / count;
    const eta = explained / variance;
    return Math.max(0, eta - ((1 - eta) * (sums.size - 1)) / Math.max(1, n - sums.size));
  };

  let electronBelt = 0;
  let protonBelt = 0;
  for (const { factors } of belts) {
    for (let k = 0; k < FACTORS_PER_SPECIES; k++) {
      electronBelt += correlation((draw) => factors[draw * FACTORS_PER_DRAW + k]);
      protonBelt += correlation((draw) => factors[draw * FACTORS_PER_DRAW + FACTORS_PER_SPECIES + k]);
    }
  }
  const timeVariation =
    correlation((draw) => record.state[2 * draw]) + correlation((draw) => record.state[2 * draw + 1]);
  const fieldModel = between((draw) => record.fieldModel[draw]);
  const rotationPhase =
    record.variant[at[0]] >= 0
      ? Math.max(0, between((draw) => record.variant[draw]) - fieldModel)
      : correlation((draw) => record.phaseProxy[draw]);
  const statisticalError = errorDeviates === null ? 0 : correlation((draw) => errorDeviates[draw]);
  const shares: UncertaintyShare[] = [
    { source: 'electronBelt', share: electronBelt },
    { source: 'protonBelt', share: protonBelt },
    { source: 'timeVariation', share: timeVariation },
    { source: 'rotationPhase', share: rotationPhase },
    { source: 'fieldModel', share: fieldModel },
    { source: 'statisticalError', share: statisticalError },
  ];
  const sum = shares.reduce((total, { share }) => total + share, 0);
  if (!(sum > 0)) return [];
  return shares.map(({ source, share }) => ({ source, share: share / sum })).toSorted((a, b) => b.share - a.share);
}
