import { describe, expect, it } from 'vitest';
import { assess } from '../../../server/margin/assess.ts';
import { lotCapability, predictivePoints } from '../../../server/margin/lot.ts';
import { normalCdf, normalQuantile } from '../../../server/numeric/distributions.ts';
import { randomStream } from '../../../server/numeric/random.ts';
import { flatElectrons, toyInput, toyTrajectory } from '../../unit/margin/toy.ts';

/** Every check here allows 4 σ of its own sampling error. */
const K_SIGMA = 4;

describe('tolerance limits of lots', () => {
  it('cover the stated share with the stated confidence', () => {
    // Source: the definition. Lots of 5 are drawn from a known log-normal; the limit at C = 0.90, P = 0.95 must lie
    // below its true 5 % quantile in 90 % of them.
    const lots = 20_000;
    const random = randomStream(1, 0, 0);
    const quantile = Math.exp(0.4 * normalQuantile(0.05));
    let covered = 0;
    for (let lot = 0; lot < lots; lot++) {
      const doses = Array.from({ length: 5 }, () => Math.exp(0.4 * random.normal()));
      if (lotCapability(doses, 0.9, 0.95).limitKradSi <= quantile) covered++;
    }
    expect(Math.abs(covered / lots - 0.9)).toBeLessThan(K_SIGMA * Math.sqrt((0.9 * 0.1) / lots));
  });

  it('predict the next device at the stated rate', () => {
    // Source: the definition. The next device of the lot fails below the predictive 10 % point in 10 % of trials.
    const lots = 5000;
    const random = randomStream(2, 0, 0);
    let below = 0;
    for (let lot = 0; lot < lots; lot++) {
      const doses = Array.from({ length: 4 }, () => Math.exp(0.3 * random.normal()));
      const points = predictivePoints(lotCapability(doses), 1000);
      if (Math.exp(0.3 * random.normal()) < Math.sqrt(points[99] * points[100])) below++;
    }
    expect(Math.abs(below / lots - 0.1)).toBeLessThan(K_SIGMA * Math.sqrt((0.1 * 0.9) / lots));
  });
});

describe('percentiles over seeds', () => {
  it('scatter round the closed form as independent draws do', () => {
    // Source: p50 and p95 of a log-normal of σ = √(0.35² + 0.3²) decades; the percentile of N independent draws has
    // σ_p = σ √(p(1−p)/N) / φ(z).
    const seeds = 100;
    const draws = 1000;
    const sigma = Math.hypot(0.35, 0.3);
    const trajectories = [toyTrajectory({ fluence: flatElectrons })];
    const offsets = { p50: [] as number[], p95: [] as number[] };
    for (let seed = 0; seed < seeds; seed++) {
      const [row] = assess(toyInput({ trajectories, sampling: { draws, seed } })).shieldDose;
      offsets.p50.push(Math.log10(row.band!.p50 / row.doseKradSi!.total));
      offsets.p95.push(Math.log10(row.band!.p95 / row.doseKradSi!.total) - normalQuantile(0.95) * sigma);
    }
    for (const [name, p] of [['p50', 0.5] as const, ['p95', 0.95] as const]) {
      const density = Math.exp(-0.5 * normalQuantile(p) ** 2) / Math.sqrt(2 * Math.PI);
      const expected = (sigma * Math.sqrt((p * (1 - p)) / draws)) / density;
      const mean = offsets[name].reduce((sum, value) => sum + value, 0) / seeds;
      const variance = offsets[name].reduce((sum, value) => sum + value ** 2, 0) / seeds;
      expect(Math.abs(mean), `mean of ${name}`).toBeLessThan((K_SIGMA * expected) / Math.sqrt(seeds));
      // A sample variance of n values has relative σ √(2/n).
      expect(Math.abs(variance / expected ** 2 - 1), `variance of ${name}`).toBeLessThan(
        K_SIGMA * Math.sqrt(2 / seeds),
      );
    }
  });

  it('give a probability that is right on average', () => {
    const seeds = 60;
    const draws = 500;
    const sigma = Math.hypot(0.35, 0.3) * Math.LN10;
    const trajectories = [toyTrajectory({ fluence: flatElectrons })];
    let sum = 0;
    let expected = 0;
    for (let seed = 100; seed < 100 + seeds; seed++) {
      const result = assess(toyInput({ trajectories, sampling: { draws, seed } }));
      sum += result.margins[0].confidence! / seeds;
      expected = normalCdf(Math.log(30 / (2 * result.shieldDose[0].doseKradSi!.total)) / sigma);
    }
    // Source: P(30 krad > 2 D) for the same log-normal.
    expect(Math.abs(sum - expected)).toBeLessThan(K_SIGMA * Math.sqrt((expected * (1 - expected)) / (draws * seeds)));
  });
});
