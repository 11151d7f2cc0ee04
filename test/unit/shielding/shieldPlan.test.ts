import { describe, expect, it } from 'vitest';
import { AppError } from '../../../server/errors.ts';
import { shieldKey, stacksOf } from '../../../server/shielding/composeShield.ts';
import { placeMassKg } from '../../../server/shielding/mass.ts';
import { describeShield, plainStack } from '../../../server/shielding/shieldPlan.ts';
import type { BoxInput, LayerInput, ShieldInput, StackInput } from '../../../server/shielding/types.ts';

const OPTIONS = { effort: 'standard', targetMaterialId: 'Si', seed: 1 } as const;
const al = (thicknessMm: number): LayerInput[] => [{ materialId: 'Al', thicknessMm }];
const stack: StackInput = { geometry: 'sphere', layers: al(2) };
const BOX: BoxInput = {
  innerSizeMm: [100, 120, 140],
  positionMm: [0, 0, 0],
  walls: Array.from({ length: 6 }, () => al(2)),
};

function refusal(shield: ShieldInput): AppError {
  try {
    plainStack(shield, '#/shield');
  } catch (error) {
    if (error instanceof AppError) return error;
  }
  throw new Error('was not refused');
}

describe('shields', () => {
  it.each<[string, ShieldInput]>([
    [
      '#/shield/sectors',
      {
        kind: 'sectors',
        sectors: [
          { fraction: 0.4, stack },
          { fraction: 0.5999, stack },
        ],
      },
    ],
    [
      '#/shield/sectors/0/fraction',
      {
        kind: 'sectors',
        sectors: [
          { fraction: -0.1, stack },
          { fraction: 1.1, stack },
        ],
      },
    ],
    ['#/shield/spot/coveredFraction', { kind: 'stack', stack, spot: { layers: al(1), coveredFraction: 1.5 } }],
    ['#/shield/box/innerSizeMm/1', { kind: 'box', box: { ...BOX, innerSizeMm: [100, 0, 140] } }],
    ['#/shield/box/positionMm/0', { kind: 'box', box: { ...BOX, positionMm: [51, 0, 0] } }],
    ['#/shield/box/walls', { kind: 'box', box: { ...BOX, walls: [al(1)] } }],
    ['#/shield/box/positionMm/0', { kind: 'box', box: { ...BOX, inner: { ...BOX, innerSizeMm: [98, 100, 100] } } }],
    ['#/shield/rays', { kind: 'box', box: BOX, rays: 10 }],
  ])('refuse a faulty %s and name it', (pointer, shield) => {
    const error = refusal(shield);
    expect(error.code).toBe('SHIELD_INVALID');
    expect(error.places.map((place) => place.pointer)).toContain(pointer);
  });

  it('need few responses: those between which slants of walls of one material lie', () => {
    const stacks = stacksOf({ kind: 'box', box: BOX });
    expect(stacks.length).toBeLessThanOrEqual(6);
    expect(stacks.every(({ geometry, layers }) => geometry === 'sphere' && layers.length === 1)).toBe(true);
    const minimum = stacksOf({ kind: 'box', box: BOX, pathRule: 'minimum' });
    expect(minimum).toEqual([{ geometry: 'shell', innerRadiusMm: 50, layers: al(2) }]);
  });

  it('refuse more responses than a printed limit', () => {
    const wall = (i: number): LayerInput[] => [
      { materialId: 'Al', thicknessMm: 1 + 0.1 * i },
      { materialId: 'Ta', thicknessMm: 0.2 },
    ];
    const different: ShieldInput = {
      kind: 'box',
      box: {
        ...BOX,
        walls: Array.from({ length: 6 }, (_, i) => wall(i)),
        inner: {
          innerSizeMm: [20, 30, 40],
          positionMm: [5, 5, 5],
          walls: Array.from({ length: 6 }, (_, i) => [{ materialId: 'Cu', thicknessMm: 1 + 0.1 * i }]),
        },
      },
    };
    let refused: unknown;
    try {
      stacksOf(different);
    } catch (error) {
      refused = error;
    }
    expect((refused as AppError).code).toBe('RESPONSE_UNSUPPORTED');
    expect((refused as AppError).message).toContain('the limit is 60');
  });

  it('have the address of their stack when they are one, and another for every change', () => {
    const plain = shieldKey({ kind: 'stack', stack }, OPTIONS);
    const spot = { layers: al(1) };
    const keys = [
      plain,
      shieldKey({ kind: 'stack', stack, spot: { ...spot, coveredFraction: 0.5 } }, OPTIONS),
      shieldKey({ kind: 'stack', stack, spot: { ...spot, coveredFraction: 0.6 } }, OPTIONS),
      shieldKey({ kind: 'box', box: BOX }, OPTIONS),
      shieldKey({ kind: 'box', box: { ...BOX, positionMm: [1, 0, 0] } }, OPTIONS),
    ];
    expect(new Set(keys).size).toBe(keys.length);
    expect(shieldKey({ kind: 'stack', stack, spot }, OPTIONS)).toBe(
      shieldKey({ kind: 'stack', stack: { ...stack, layers: [...stack.layers, ...al(1)] } }, OPTIONS),
    );
  });

  it('weigh what their geometry weighs', () => {
    // Closed forms: plates over a cube's faces with their edges; a shell of 2 mm about 50 mm; an area.
    const exact = (104 * 124 * 144 - 100 * 120 * 140) * 1e-3 * 2.6989e-3;
    expect(placeMassKg({ shield: { kind: 'box', box: BOX } })).toBeCloseTo(exact, 3);
    const slab: ShieldInput = { kind: 'stack', stack: { geometry: 'slab', layers: al(2) } };
    expect(placeMassKg({ shield: slab, innerBoxMm: [100, 120, 140] })).toBeCloseTo(exact, 3);
    const shell = ((4 / 3) * Math.PI * (5.2 ** 3 - 5 ** 3) * 2.6989) / 1000;
    expect(placeMassKg({ shield: slab, innerSphereRadiusMm: 50 })).toBeCloseTo(shell, 6);
    expect(placeMassKg({ shield: slab, areaM2: 0.5 })).toBeCloseTo(0.2 * 2.6989 * 0.5 * 10, 6);
    expect(placeMassKg({ shield: { ...slab, spot: { layers: al(1) } }, areaM2: 0.5 })).toBeNull();
    expect(placeMassKg({ shield: slab })).toBeNull();
  });

  it('say in one line what they are and how paths count', () => {
    expect(describeShield({ kind: 'box', box: BOX })).toContain('walls all of Al 2 mm');
    expect(describeShield({ kind: 'box', box: BOX, pathRule: 'minimum' })).toContain('minimum paths');
    expect(describeShield({ kind: 'sectors', sectors: [{ name: 'radiator', fraction: 1, stack }] })).toContain(
      '100 % (radiator) behind Al 2 mm',
    );
  });
});
