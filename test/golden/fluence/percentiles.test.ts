import { describe, expect, it } from 'vitest';
import { fluencePercentiles, TIME_SIGMA_DEX } from '../../../server/fluence/percentiles.ts';
import { integralFluence, variantEdges } from '../../../server/fluence/spectra.ts';
import { beltModel, kennelPetschekRatio } from '../../../server/flux/index.ts';
import { toyArtefact } from '../../unit/margin/toy.ts';

const DRAWS = 20_000;
const THRESHOLDS = { electron: [1], proton: [10] };
/** Standard error of a quantile of 20 000 draws in units of σ: √(p(1−p)/n)/φ(z), times 4. */
const SLACK_SIGMAS = { p05: 4 * 0.015, p50: 4 * 0.0089, p95: 4 * 0.015 };
const Z95 = 1.6449;
/** Standard error of a share near 0.26 of 20 000 draws, times 4. */
const SHARE_SLACK = 4 * 0.0031;

describe('percentiles of fluences', () => {
  it.each([
    ['electron', 1],
    ['proton', 10],
  ] as const)(
    'are those of a log-normal when only the global scale and the time are drawn: %s',
    (species, threshold) => {
      // Source: closed form, log10 of the fluence is normal with σ = √(0.35² + 0.3²) about the median.
      const artefact = toyArtefact({ fluence: ({ energyMeV }) => energyMeV ** -3 });
      const median = integralFluence(species, variantEdges(artefact, 0, species), threshold);
      const [{ p05PerCm2, p50PerCm2, p95PerCm2 }] = fluencePercentiles(artefact, THRESHOLDS, DRAWS, 3)[species];
      const sigma = Math.hypot(0.35, TIME_SIGMA_DEX);
      expect(Math.abs(Math.log10(p50PerCm2 / median) / sigma)).toBeLessThan(SLACK_SIGMAS.p50);
      expect(Math.abs(Math.log10(p05PerCm2 / median) / sigma + Z95)).toBeLessThan(SLACK_SIGMAS.p05);
      expect(Math.abs(Math.log10(p95PerCm2 / median) / sigma - Z95)).toBeLessThan(SLACK_SIGMAS.p95);
    },
  );

  it('spread by the whole of σ(L) where the belts are extrapolated', () => {
    // Source: closed form, g σ₀ + i √(σ² − σ₀²) + 0.3 s has σ = √(σ(L)² + 0.3²).
    const artefact = toyArtefact({ sides: ['inside'], sigmaDex: [1.2], fluence: ({ energyMeV }) => energyMeV ** -3 });
    const [{ p50PerCm2, p95PerCm2 }] = fluencePercentiles(artefact, THRESHOLDS, DRAWS, 4).electron;
    const sigma = Math.hypot(1.2, TIME_SIGMA_DEX);
    expect(Math.abs(Math.log10(p95PerCm2 / p50PerCm2) / sigma - Z95)).toBeLessThan(SLACK_SIGMAS.p95 + SLACK_SIGMAS.p50);
  });

  it('draw the phase by its weight', () => {
    // Source: closed form, six decades between the phases and σ = 0.3 in each: the 5th percentile is of the rare phase.
    const variants = [0.2, 0.8].map((weight, k) => ({
      fieldModelId: 'uranus-q3' as const,
      offsetDeg: k,
      weight,
      primary: true,
    }));
    const artefact = toyArtefact({ variants, sharedSigmaDex: 0, fluence: ({ variant }) => 10 ** (6 * variant) });
    const [{ p05PerCm2, p50PerCm2 }] = fluencePercentiles(artefact, THRESHOLDS, DRAWS, 3).electron;
    expect(Math.log10(p50PerCm2 / p05PerCm2)).toBeGreaterThan(5);
  });

  it('say how often the scaled Kennel-Petschek level is passed', () => {
    // Source: closed form, P(σ z > log10 2) = 0.2569 with σ = √(0.35² + 0.3²).
    const artefact = {
      ...toyArtefact({ fluence: ({ energyMeV }) => energyMeV ** -3 }),
      kennelPetschekRatio: Float64Array.of(0.5),
    };
    const { aboveKennelPetschekShare } = fluencePercentiles(artefact, THRESHOLDS, DRAWS, 3);
    expect(Math.abs(aboveKennelPetschekShare - 0.2569)).toBeLessThan(SHARE_SLACK);
  });

  it('scale the level with L to the power −4 from the anchor', () => {
    // Source: Kennel & Petschek 1966, B_eq/L in a dipole; peak ratios of Mauk & Fox 2010 (second-hand) at the anchors.
    const uranus = beltModel('uranus-belts-1');
    expect(kennelPetschekRatio(uranus, 'uranus', 4.73)).toBeCloseTo(1.11, 9);
    expect(kennelPetschekRatio(beltModel('neptune-belts-1'), 'neptune', 7.4)).toBeCloseTo(0.91, 9);
    const flat = { ...uranus, directional: () => 1 };
    expect(kennelPetschekRatio(flat, 'uranus', 8) / kennelPetschekRatio(flat, 'uranus', 4)).toBeCloseTo(16, 9);
  });
});
