import { describe, expect, it } from 'vitest';
import { AppError } from '../../../server/errors.ts';
import { assess } from '../../../server/margin/assess.ts';
import { solveThickness, type ThicknessInput, type ThicknessTools } from '../../../server/margin/thickness.ts';
import type { StackInput } from '../../../server/shielding/types.ts';
import { toyInput, toyResponse, unitAboveOneMeV } from './toy.ts';

const DENSITY: Readonly<Record<string, number>> = { Al: 2.7, Ta: 16.65 };

/** Areal density, g/cm². */
function areal(stack: StackInput): number {
  return stack.layers.reduce((sum, layer) => sum + 0.1 * (layer.thicknessMm ?? 0) * DENSITY[layer.materialId], 0);
}

/** A dose that falls steeply with areal density and flattens on a floor, as electrons over bremsstrahlung do. */
const transmission = (x: number): number => Math.exp(-3 * x) + 0.02 / (1 + x);

const tools: ThicknessTools = {
  respond: (stack) =>
    Promise.resolve(
      toyResponse({
        name: JSON.stringify(stack),
        electron: (energy) => transmission(areal(stack)) * unitAboveOneMeV(energy),
      }),
    ),
  massKg: areal,
  aluminiumEquivalentMm: (stack) => (10 * areal(stack)) / 2.7,
};

const aluminium: StackInput = { geometry: 'slab', layers: [{ materialId: 'Al', thicknessMm: 1 }] };

function input(over: Partial<ThicknessInput> = {}): ThicknessInput {
  const { trajectories, cases, sampling } = toyInput();
  return {
    trajectories,
    cases,
    sampling,
    otherSources: [],
    target: { doseKradSi: 1 },
    percentile: 95,
    phaseTreatment: 'joint',
    candidates: [{ name: 'Al', stack: aluminium, layerIndex: 0 }],
    minimumMm: 0.05,
    maximumMm: 50,
    ...over,
  };
}

describe('solveThickness', () => {
  it('returns a thickness that gives the target within 1 % when assessed anew', async () => {
    for (const target of [0.3, 1, 10]) {
      const { solutions } = await solveThickness(input({ target: { doseKradSi: target } }), tools);
      const [{ stack, status, tried, doseKradSi }] = solutions;
      expect(status).toBe('solved');
      const { places } = toyInput().options[0];
      const result = assess(
        toyInput({
          options: [
            { optionId: 'o1', name: 'Solved', places: [{ ...places[0], response: await tools.respond(stack) }] },
          ],
        }),
      );
      expect(Math.abs(result.shieldDose[0].band!.p95 / target - 1)).toBeLessThan(0.01);
      expect(result.shieldDose[0].band!.p95).toBeCloseTo(doseKradSi, 10);
      expect(tried.length).toBeLessThanOrEqual(12);
    }
  });

  it('meets the closed form at the nominal dose', async () => {
    const exponential: ThicknessTools = {
      ...tools,
      respond: (stack) =>
        Promise.resolve(
          toyResponse({
            name: JSON.stringify(stack),
            electron: (e) => Math.exp(-3 * areal(stack)) * unitAboveOneMeV(e),
          }),
        ),
    };
    const bare = assess(toyInput()).shieldDose[0].doseKradSi!.total;
    const { solutions } = await solveThickness(
      input({ target: { doseKradSi: bare / 20 }, percentile: 'nominal' }),
      exponential,
    );
    // Source: e^{−3 x} = 1/20 at x = ln 20 / 3; 1 % of dose is 0.01 / (3 · 0.27) mm here.
    expect(Math.abs(solutions[0].thicknessMm - Math.log(20) / 3 / 0.27)).toBeLessThan(0.01 / (3 * 0.27));
  });

  it('aims at the part that allows least', async () => {
    const parts = [
      { partId: 'hard', name: 'Hard', placeId: 'bay', capabilityKradSi: 100, capabilityBasis: 'test' as const },
      {
        partId: 'soft',
        name: 'Soft',
        placeId: 'bay',
        capabilityKradSi: 9,
        capabilityBasis: 'test' as const,
        requiredRdm: 3,
      },
    ];
    const result = await solveThickness(input({ target: { parts, requiredRdm: 2 } }), tools);
    expect(result.targetDoseKradSi).toBe(3);
    expect(result.drivingPartId).toBe('soft');
    expect(Math.abs(result.solutions[0].doseKradSi / 3 - 1)).toBeLessThan(0.01);
  });

  it('takes the worst case and names it, and picks the lightest order', async () => {
    const cases = [
      { caseId: 'once', name: 'Once', legs: [{ trajectoryId: 't1', repetitions: 1 }] },
      { caseId: 'thrice', name: 'Thrice', legs: [{ trajectoryId: 't1', repetitions: 3 }] },
    ];
    const candidates = [
      { name: 'Al', stack: aluminium, layerIndex: 0 },
      {
        name: 'Ta under 10 mm Al',
        stack: {
          geometry: 'slab' as const,
          layers: [
            { materialId: 'Al', thicknessMm: 10 },
            { materialId: 'Ta', thicknessMm: 1 },
          ],
        },
        layerIndex: 1,
      },
    ];
    const { solutions, lightest } = await solveThickness(input({ cases, candidates, minimumMm: 0.01 }), tools);
    expect(solutions.map(({ drivingCaseId }) => drivingCaseId)).toEqual(['thrice', 'thrice']);
    // The same areal density does the same here, so both weigh the same unless the fixed layer is already too much.
    expect(solutions[1].status).toBe('metAtThinnest');
    expect(lightest).toBe(0);
    expect(solutions[0].massKg!).toBeLessThan(solutions[1].massKg!);
  });

  it('says when no thickness does, and names the best', async () => {
    await expect(solveThickness(input({ target: { doseKradSi: 1e-6 }, maximumMm: 2 }), tools)).rejects.toMatchObject({
      code: 'THICKNESS_UNREACHABLE',
      message: expect.stringContaining('"Al"'),
    });
  });

  it('adds other sources to the dose that is solved for', async () => {
    const otherSources = [{ name: 'RTG', source: 'Note', phase: 'all', doseKradSi: 0.9 }];
    const { solutions } = await solveThickness(input({ otherSources }), tools);
    const alone = await solveThickness(input(), tools);
    expect(solutions[0].thicknessMm).toBeGreaterThan(alone.solutions[0].thicknessMm);
    await expect(
      solveThickness(input({ otherSources: [{ ...otherSources[0], doseKradSi: 2 }] }), tools),
    ).rejects.toThrow(AppError);
  });

  it.each<[string, Partial<ThicknessInput>, string]>([
    ['a zero dose', { target: { doseKradSi: 0 } }, '#/target/doseKradSi'],
    ['no parts', { target: { parts: [], requiredRdm: 2 } }, '#/target/parts'],
    [
      'a layer that is not there',
      { candidates: [{ name: 'Al', stack: aluminium, layerIndex: 1 }] },
      '#/candidates/0/layerIndex',
    ],
    ['an empty range', { minimumMm: 2, maximumMm: 2 }, '#/maximumMm'],
    ['a low percentile', { percentile: 10 }, '#/percentile'],
    ['a single draw', { sampling: { draws: 1, seed: 1 } }, '#/sampling/draws'],
  ])('refuses %s', async (_, over, pointer) => {
    await expect(solveThickness(input(over), tools)).rejects.toMatchObject({
      code: 'ASSESSMENT_INVALID',
      places: [expect.objectContaining({ pointer })],
    });
  });
});
