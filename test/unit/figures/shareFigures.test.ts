import { describe, expect, it } from 'vitest';
import { fieldComparisonScene, fluenceByLScene } from '../../../server/figures/index.ts';
import type { ExposureSummary, SpeciesSummary } from '../../../server/fluence/summary.ts';

const species = (above: readonly number[]): SpeciesSummary => ({
  energiesMeV: [1, 10],
  differentialPerCm2MeV: [1, 1],
  integralPerCm2: [2, 1],
  fluencePerCm2: [1],
  peaks: [],
  byL: above.map((above1MeVPerCm2, i) => ({ lFrom: 2 * 2 ** i, lTo: 4 * 2 ** i, above1MeVPerCm2 })),
  byEvidence: { anchored: 0.5, sampled: 0.25, sampledQualitative: 0, extrapolated: 0.25 },
});

const summary = {
  thresholdsMeV: [0.1, 1, 10],
  thresholdsBySpeciesMeV: { electron: [0.1, 1, 10], proton: [1, 10] },
  species: { electron: species([1e9, 3e10]), proton: species([1e6, 0]) },
  fieldComparison: [
    { fieldModelId: 'first', electronPerCm2: [1e11, 1e10, 0], protonPerCm2: [1e7, 1e6] },
    { fieldModelId: 'second', electronPerCm2: [2e11, 2e10, 1e8], protonPerCm2: [2e7, 2e6] },
  ],
} as unknown as ExposureSummary;

describe('fluence by L', () => {
  const scene = fluenceByLScene(summary);

  it('says the sum over the bins and the shares by evidence', () => {
    expect(scene.description).toContain('3.10×10¹⁰ cm⁻² over all L');
    expect(scene.description).toContain('25 % where nothing was measured');
    expect(scene.description).toContain('none sampled, qualitative');
  });

  it('reads each bin out with units, inside the figure', () => {
    expect(scene.readOuts.map((entry) => entry.text)).toEqual([
      'L 2.00 to 4.00: 1.00×10⁹ electrons and 1.00×10⁶ protons cm⁻² above 1 MeV',
      'L 4.00 to 8.00: 3.00×10¹⁰ electrons and none protons cm⁻² above 1 MeV',
    ]);
    for (const { x, y } of scene.readOuts) {
      expect(x).toBeGreaterThan(0);
      expect(x).toBeLessThan(scene.widthPx);
      expect(y).toBeGreaterThan(0);
      expect(y).toBeLessThan(scene.heightPx);
    }
    expect(scene.readOuts[1].y).toBeLessThan(scene.readOuts[0].y);
  });

  it('gives the bins of both species as data', () => {
    expect(scene.data.rows).toEqual([
      ['electron', 2, 4, 1e9],
      ['electron', 4, 8, 3e10],
      ['proton', 2, 4, 1e6],
      ['proton', 4, 8, 0],
    ]);
  });
});

describe('field models compared', () => {
  const scene = fieldComparisonScene(summary);

  it('says the fluence above 1 MeV of every model', () => {
    expect(scene.description).toBe('Electrons above 1.00 MeV: first 1.00×10¹⁰ cm⁻², second 2.00×10¹⁰ cm⁻².');
  });

  it('keeps read-outs finite where a fluence is nought', () => {
    expect(scene.readOuts).toHaveLength(6);
    expect(scene.readOuts.every(({ x, y }) => Number.isFinite(x) && Number.isFinite(y))).toBe(true);
    expect(scene.readOuts[2].text).toBe('first: none electrons cm⁻² above 10.0 MeV');
  });

  it('leaves a cell empty where a species has no further threshold', () => {
    expect(scene.data.rows[2]).toEqual(['first', 10, 0, null, null]);
    expect(scene.data.rows[3]).toEqual(['second', 0.1, 2e11, 1, 2e7]);
  });
});
