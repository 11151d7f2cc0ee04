import { describe, expect, it } from 'vitest';
import { percentile, shareBelow } from '../../../server/margin/percentiles.ts';
import { scaleShield } from '../../../server/margin/scaleShield.ts';
import { phaseDistributions, schedulePasses, variantAt, variantNearest } from '../../../server/margin/schedule.ts';
import { threeDigits } from '../../../server/margin/text.ts';
import { flatElectrons, toyArtefact, toyTrajectory } from './toy.ts';

describe('scaleShield', () => {
  it('scales every layer in its own unit and nothing else', () => {
    const al = { materialId: 'Al', thicknessMm: 2 };
    const ta = { materialId: 'Ta', arealDensityGPerCm2: 1 };
    const box = {
      innerSizeMm: [100, 200, 300] as const,
      walls: [[al], [ta], [al, ta], [{ materialId: 'Al', thicknessMil: 100 }], [al], [al]] as [
        (typeof al)[],
        (typeof ta)[],
        (typeof al | typeof ta)[],
        { materialId: string; thicknessMil: number }[],
        (typeof al)[],
        (typeof al)[],
      ],
      positionMm: [0, 0, 10] as const,
    };
    const scaled = scaleShield({ kind: 'box', box: { ...box, inner: box } }, 1.1);
    if (scaled.kind !== 'box') throw new TypeError('the kind changed');
    expect(scaled.box.innerSizeMm).toEqual([100, 200, 300]);
    expect(scaled.box.walls[2][0].thicknessMm).toBeCloseTo(2.2, 12);
    expect(scaled.box.walls[2][1]).toEqual({ materialId: 'Ta', arealDensityGPerCm2: 1.1 });
    expect(scaled.box.inner?.walls[3][0].thicknessMil).toBeCloseTo(110, 12);
    const sectors = scaleShield(
      { kind: 'sectors', sectors: [{ fraction: 1, stack: { geometry: 'sphere', layers: [al] } }] },
      0.9,
    );
    expect(sectors).toEqual({
      kind: 'sectors',
      sectors: [{ fraction: 1, stack: { geometry: 'sphere', layers: [{ materialId: 'Al', thicknessMm: 1.8 }] } }],
    });
    expect(() => scaleShield(sectors, 0)).toThrow(TypeError);
  });
});

describe('schedulePasses', () => {
  const leg = (spanDays: number, repetitions: number, groupDays: readonly number[] = [0]) => ({
    trajectory: toyTrajectory({ fluence: flatElectrons, groupDays }, { spanDays }),
    repetitions,
  });

  it('starts a new state of the belts 30 days after the pass that began the last', () => {
    // Repetitions every 12 days: days 0, 12, 24 share, 36, 48, 60 share, and so on.
    const { events, stateCount, flightCount } = schedulePasses([leg(12, 7)]);
    expect(events.map(({ state }) => state)).toEqual([0, 0, 0, 1, 1, 1, 2]);
    expect(events.map(({ flight }) => flight)).toEqual([0, 1, 2, 3, 4, 5, 6]);
    expect([stateCount, flightCount]).toEqual([3, 7]);
  });

  it('shares a state between legs that fly together, whatever their order', () => {
    const { events } = schedulePasses([leg(10, 1, [100]), leg(10, 2, [95])]);
    // Days 100, 95 and 105.
    expect(events.map(({ state }) => state)).toEqual([0, 0, 0]);
    expect(schedulePasses([leg(10, 1, [0, 40])]).events.map(({ state }) => state)).toEqual([0, 1]);
  });
});

describe('phase distributions', () => {
  const artefact = toyArtefact({
    variants: [
      { fieldModelId: 'uranus-ah5', offsetDeg: 0, weight: 0.5, primary: false },
      { fieldModelId: 'uranus-q3', offsetDeg: 350, weight: 0.375, primary: true },
      { fieldModelId: 'uranus-q3', offsetDeg: 10, weight: 0.125, primary: true },
      { fieldModelId: 'uranus-q3', offsetDeg: 200, weight: 0, primary: true },
    ],
    fluence: flatElectrons,
  });

  it('put the chosen field first and weigh offsets within a field', () => {
    const [q3, ah5] = phaseDistributions(artefact);
    expect([q3.fieldModelId, ah5.fieldModelId]).toEqual(['uranus-q3', 'uranus-ah5']);
    expect(q3.offsetsDeg).toEqual([10, 200, 350]);
    expect(q3.cumulative).toEqual([0.25, 0.25, 1]);
    expect([0, 0.249, 0.25, 0.999].map((u) => variantAt(q3, u))).toEqual([2, 2, 1, 1]);
  });

  it('find the nearest offset round the circle', () => {
    const [q3] = phaseDistributions(artefact);
    expect([0.5, -2, 100, 280, 359].map((offset) => variantNearest(q3, offset))).toEqual([2, 1, 2, 1, 1]);
  });
});

describe('percentiles and words', () => {
  it('interpolate between order statistics', () => {
    // Source: definition 7 of Hyndman & Fan (1996), worked by hand.
    const values = Float64Array.of(1, 2, 4, 8);
    const expected = [1, 1.75, 3, 7.4, 8];
    [0, 25, 50, 95, 100].forEach((p, i) => {
      expect(percentile(values, p)).toBeCloseTo(expected[i], 12);
    });
    expect([0.5, 1, 1.5, 8, 9].map((limit) => shareBelow(values, limit))).toEqual([0, 0, 0.25, 0.75, 1]);
  });

  it('write three figures without surprises', () => {
    expect([0.01234, 1, 12.345, 999.6, 12345, 1.234e6, 1.2e-5, 0].map(threeDigits)).toEqual([
      '0.0123',
      '1.00',
      '12.3',
      '1000',
      '12300',
      '1.23e+6',
      '1.20e-5',
      '0.00',
    ]);
  });
});
