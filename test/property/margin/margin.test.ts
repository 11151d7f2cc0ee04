import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { assess } from '../../../server/margin/assess.ts';
import type { AssessmentInput, PartInput } from '../../../server/margin/input.ts';
import { toleranceFactor } from '../../../server/margin/lot.ts';
import { CAPABILITY_BASES } from '../../../server/margin/parts.ts';
import { formatPartsCsv, parsePartsCsv } from '../../../server/margin/partsCsv.ts';
import { verdictOf } from '../../../server/margin/verdict.ts';
import { toyInput, toyResponse, toyTrajectory } from '../../unit/margin/toy.ts';

const RUNS = { numRuns: 25, seed: 20261201 };
const REL = 1e-6;

/** A case of two species, three L bins, three phases, scaled by `scale`. */
function varied(scale: number, slope: number): AssessmentInput['trajectories'] {
  return [
    toyTrajectory(
      {
        variants: [0, 120, 240].map((offsetDeg) => ({
          fieldModelId: 'uranus-q3' as const,
          offsetDeg,
          weight: 1 / 3,
          primary: true,
        })),
        sides: ['inside', 'anchor', 'outside'],
        sigmaDex: [0.9, 0.35, 0.6],
        region: (_, bin) => (['extrapolated', 'anchored', 'sampled'] as const)[bin],
        fluence: ({ species, energyMeV, bin, variant }) =>
          scale * (species === 'electron' ? 1e10 : 1e7) * energyMeV ** slope * (1 + bin) * (1 + variant),
      },
      { mode: 'sweep' },
    ),
  ];
}

const response = toyResponse({
  electron: (e) => (e > 0.5 ? 1e-9 : 0),
  bremsstrahlung: () => 1e-12,
  proton: (e) => (e > 10 ? 1e-8 : 0),
});

function options(count: number): AssessmentInput['options'] {
  return Array.from({ length: count }, (_, i) => ({
    optionId: `o${i}`,
    name: `Option ${i}`,
    places: [
      {
        placeId: 'bay',
        name: 'Bay',
        geometry: 'box' as const,
        shieldText: 'walls',
        massKg: 1 + i,
        response: i === 0 ? response : toyResponse({ name: `r${i}`, electron: (e) => (e > 0.5 + i ? 1e-9 : 0) }),
      },
    ],
  }));
}

describe('properties of an assessment', () => {
  it('scales with the belts, the margins against them', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 1e-3, max: 1e3, noNaN: true }),
        fc.double({ min: -5, max: -1.5, noNaN: true }),
        (scale, slope) => {
          const sampling = { draws: 200, seed: 3 };
          const one = assess(toyInput({ trajectories: varied(1, slope), options: options(1), sampling }));
          const many = assess(toyInput({ trajectories: varied(scale, slope), options: options(1), sampling }));
          const [a, b] = [one.shieldDose[0], many.shieldDose[0]];
          expect(Math.abs(b.doseKradSi!.total / (scale * a.doseKradSi!.total) - 1)).toBeLessThan(REL);
          expect(Math.abs(b.band!.p95 / (scale * a.band!.p95) - 1)).toBeLessThan(REL);
          expect(Math.abs((scale * many.margins[0].achievedRdm!) / one.margins[0].achievedRdm! - 1)).toBeLessThan(REL);
          expect(b.extrapolatedFraction!).toBeCloseTo(a.extrapolatedFraction!, 5);
        },
      ),
      RUNS,
    );
  });

  it('keeps its shares, orders and sums', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 0, max: 1e6 }),
        fc.double({ min: 0.1, max: 300, noNaN: true }),
        (seed, capability) => {
          const parts: PartInput[] = [{ ...toyInput().parts[0], capabilityKradSi: capability }];
          const result = assess(
            toyInput({ trajectories: varied(1, -3), options: options(3), parts, sampling: { draws: 200, seed } }),
          );
          for (const row of result.shieldDose) {
            const { electron, bremsstrahlung, proton, other, total } = row.doseKradSi!;
            expect(electron + bremsstrahlung + proton + other).toBeCloseTo(total, 10);
            expect(row.band!.p05).toBeLessThanOrEqual(row.band!.p50);
            expect(row.band!.p50).toBeLessThanOrEqual(row.band!.p95);
            expect(Object.values(row.byEvidence!).reduce((sum, share) => sum + share, 0)).toBeCloseTo(1, 10);
            expect(row.uncertainty.reduce((sum, { share }) => sum + share, 0)).toBeCloseTo(1, 10);
            expect(row.worstPhase!.doseKradSi).toBeGreaterThanOrEqual(
              Math.max(...row.byPhase.map((p) => p.doseKradSi)) * (1 - REL),
            );
          }
          for (const row of result.margins) {
            expect(row.probabilityAboveDose!).toBeGreaterThanOrEqual(row.confidence!);
            expect(row.probabilityAboveDose!).toBeLessThanOrEqual(1);
            expect(row.achievedRdm!).toBeGreaterThanOrEqual(row.achievedRdmP95!);
          }
          const counted = Object.values(result.summary.verdictCounts).reduce((sum, count) => sum + count, 0);
          expect(counted).toBe(result.margins.length);
          expect(result.comparison.some(({ nonDominated }) => nonDominated)).toBe(true);
        },
      ),
      RUNS,
    );
  });

  it('does not care about the order of options', () => {
    const sampling = { draws: 300, seed: 4 };
    const forth = assess(toyInput({ trajectories: varied(1, -2.5), options: options(4), sampling }));
    const back = assess(
      toyInput({ trajectories: varied(1, -2.5), options: options(4).toReversed(), baselineOptionId: 'o0', sampling }),
    );
    expect(back.shieldDose.toReversed()).toEqual(forth.shieldDose);
    expect(back.comparison.toReversed()).toEqual(forth.comparison);
  });
});

describe('properties of verdicts and lots', () => {
  it('a better capability never makes a verdict worse', () => {
    const rank = { doesNotComply: 0, needsSectorAnalysis: 1, notDemonstrated: 2, meets: 3, notAssessed: -1 };
    const margin = fc.double({ min: 0.01, max: 100, noNaN: true });
    fc.assert(
      fc.property(
        margin,
        fc.double({ min: 1, max: 50, noNaN: true }),
        fc.double({ min: 1, max: 5, noNaN: true }),
        fc.double({ min: 0, max: 1, noNaN: true }),
        fc.constantFrom('slab' as const, 'box' as const),
        (p95, ratio, better, extrapolatedFraction, geometry) => {
          const at = (factor: number): number =>
            rank[
              verdictOf({
                requiredRdm: 2,
                achievedRdmAtVerdict: factor * p95,
                achievedRdmP95: factor * p95,
                achievedRdmP50: factor * p95 * ratio,
                verdictPercentile: 95,
                extrapolatedFraction,
                extrapolatedShareLimit: 0.5,
                geometry,
              }).verdict
            ];
          expect(at(better)).toBeGreaterThanOrEqual(at(1));
        },
      ),
      { numRuns: 500, seed: 20261201 },
    );
  });

  it('the tolerance factor grows with confidence and share and falls with the sample', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 2, max: 60 }),
        fc.double({ min: 0.5, max: 0.98, noNaN: true }),
        fc.double({ min: 0.55, max: 0.99, noNaN: true }),
        (n, confidence, probability) => {
          const factor = toleranceFactor(n, confidence, probability);
          expect(toleranceFactor(n, confidence + 0.01, probability)).toBeGreaterThan(factor);
          expect(toleranceFactor(n, confidence, probability + 0.005)).toBeGreaterThan(factor);
          if (confidence > 0.55) expect(toleranceFactor(n + 1, confidence, probability)).toBeLessThan(factor);
        },
      ),
      RUNS,
    );
  });
});

describe('parts lists', () => {
  it('survive being written and read', () => {
    const text = fc
      .string({ minLength: 1, maxLength: 20, unit: fc.constantFrom(...'aZ9 ,;"\'=+-@µ\n') })
      .map((value) => value.trim())
      .filter((value) => value !== '' && !/^'[=+\-@]/.test(value));
    const positive = fc.double({ min: 1e-6, max: 1e6, noNaN: true });
    const part = fc.record(
      {
        name: text,
        placeId: text,
        capabilityKradSi: positive,
        capabilityBasis: fc.constantFrom(...CAPABILITY_BASES),
        description: text,
        requiredRdm: positive,
        sampleSize: fc.integer({ min: 1, max: 500 }),
      },
      { requiredKeys: ['name', 'placeId', 'capabilityKradSi', 'capabilityBasis'] },
    );
    fc.assert(
      fc.property(fc.array(part, { minLength: 1, maxLength: 8 }), (rows) => {
        const parts = rows.map((row, i): PartInput => ({ ...row, partId: `P${i}` }));
        expect(parsePartsCsv(formatPartsCsv(parts))).toEqual(parts);
      }),
      { numRuns: 200, seed: 20261201 },
    );
  });
});
