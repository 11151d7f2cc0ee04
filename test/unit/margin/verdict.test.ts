import { describe, expect, it } from 'vitest';
import { VERDICTS } from '../../../server/margin/result.ts';
import { VERDICT_REASONS, type VerdictInput, verdictOf } from '../../../server/margin/verdict.ts';

/** Margin at the median, at the 95th percentile; verdict percentile 95 unless said. */
function verdict(p50: number | null, p95: number | null, over: Partial<VerdictInput> = {}): string {
  const { verdict: word, reason } = verdictOf({
    requiredRdm: 2,
    achievedRdmAtVerdict: p95,
    achievedRdmP50: p50,
    achievedRdmP95: p95,
    verdictPercentile: 95,
    extrapolatedFraction: 0.2,
    extrapolatedShareLimit: 0.5,
    geometry: 'slab',
    ...over,
  });
  return `${word} ${reason}`;
}

describe('verdicts', () => {
  it('meets at the required margin exactly and above', () => {
    expect(verdict(8, 2)).toBe('meets marginMet');
    expect(verdict(8, 2.001)).toBe('meets marginMet');
    expect(verdict(null, null)).toBe('meets marginMet');
  });

  it('asks for sectors behind slab, sphere and shell', () => {
    for (const geometry of ['slab', 'sphere', 'shell'] as const) {
      expect(verdict(8, 1.999, { geometry })).toBe('needsSectorAnalysis belowRequiredBehindSimpleShield');
      expect(verdict(8, 1, { geometry })).toBe('needsSectorAnalysis belowRequiredBehindSimpleShield');
    }
  });

  it('does not comply with sectors or a box below the requirement', () => {
    for (const geometry of ['sectors', 'box'] as const) {
      expect(verdict(8, 1.999, { geometry })).toBe('doesNotComply belowRequiredWithSectors');
    }
  });

  it('does not comply below 1 behind anything', () => {
    for (const geometry of ['slab', 'sphere', 'shell', 'sectors', 'box'] as const) {
      expect(verdict(8, 0.999, { geometry })).toBe('doesNotComply capabilityBelowDose');
    }
  });

  it('is not demonstrated where the median meets, the 95th does not, and most is extrapolated', () => {
    const extrapolatedFraction = 0.51;
    for (const geometry of ['slab', 'box'] as const) {
      expect(verdict(8, 1.5, { extrapolatedFraction, geometry })).toBe('notDemonstrated metOnlyBelow95thPercentile');
      expect(verdict(8, 0.5, { extrapolatedFraction, geometry })).toBe('notDemonstrated metOnlyBelow95thPercentile');
    }
    // The limit itself is still allowed, and a median below the requirement is a plain shortfall.
    expect(verdict(8, 1.5, { extrapolatedFraction: 0.5 })).toBe('needsSectorAnalysis belowRequiredBehindSimpleShield');
    expect(verdict(1.9, 1.5, { extrapolatedFraction })).toBe('needsSectorAnalysis belowRequiredBehindSimpleShield');
    expect(verdict(1.9, 0.5, { extrapolatedFraction })).toBe('doesNotComply capabilityBelowDose');
  });

  it('holds a study that judges below the 95th percentile to the same evidence', () => {
    const at80 = { verdictPercentile: 80, achievedRdmAtVerdict: 2.5 };
    expect(verdict(8, 1.5, at80)).toBe('meets marginMet');
    expect(verdict(8, 1.5, { ...at80, extrapolatedFraction: 0.6 })).toBe('notDemonstrated metOnlyBelow95thPercentile');
    expect(verdict(8, 2, { ...at80, extrapolatedFraction: 0.6 })).toBe('meets marginMetDespiteExtrapolation');
  });

  it('meets above the 95th percentile whatever is extrapolated, and says so', () => {
    expect(verdict(20, 6, { verdictPercentile: 99, achievedRdmAtVerdict: 3, extrapolatedFraction: 0.9 })).toBe(
      'meets marginMetDespiteExtrapolation',
    );
  });

  it('has a sentence for every reason and a fixed list of words', () => {
    for (const sentence of Object.values(VERDICT_REASONS)) expect(sentence).toMatch(/^[A-Z].*\.$/);
    expect(VERDICTS).toEqual(['meets', 'needsSectorAnalysis', 'doesNotComply', 'notDemonstrated', 'notAssessed']);
  });
});
