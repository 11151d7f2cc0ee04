import { describe, expect, it } from 'vitest';
import { pathsIn } from '../../../server/shielding/shieldPlan.ts';
import type { BoxInput, LayerInput, ShieldInput } from '../../../server/shielding/types.ts';

const wall = (thicknessMm: number, materialId = 'Al'): LayerInput[] => [{ materialId, thicknessMm }];
const cube = (sizeMm: number, positionMm: BoxInput['positionMm'] = [0, 0, 0]): ShieldInput => ({
  kind: 'box',
  box: { innerSizeMm: [sizeMm, sizeMm, sizeMm], positionMm, walls: Array.from({ length: 6 }, () => wall(2)) },
});
const RAYS = 4096;
/** Error of the mean of a smooth function over 4096 equal-area directions. */
const QUADRATURE = 1e-3;

describe('ways in through a box', () => {
  it('have weights that sum to 1 and the mean cosine of a cube seen from its centre', () => {
    // Source: closed form. ∫cos θ dΩ over a square of side 2 at distance 1 is ∬ dx dy / (1 + x² + y²)² =
    // 2√2 arctan(1/√2); six of them over 4π.
    const paths = pathsIn(cube(200), RAYS);
    const mean = paths.reduce((sum, { weight, walls }) => sum + weight / walls[0].stretch, 0);
    expect(paths.reduce((sum, { weight }) => sum + weight, 0)).toBeCloseTo(1, 12);
    expect(Math.abs(mean / ((6 * 2 * Math.SQRT2 * Math.atan(1 / Math.SQRT2)) / (4 * Math.PI)) - 1)).toBeLessThan(
      QUADRATURE,
    );
  });

  it('end at sec θ = √3 in the corner of a cube seen from its centre', () => {
    // Source: closed form, the diagonal of a cube.
    const stretches = pathsIn(cube(200), RAYS).map(({ walls }) => walls[0].stretch);
    expect(Math.max(...stretches)).toBeLessThan(Math.sqrt(3));
    expect(Math.max(...stretches)).toBeGreaterThan(0.97 * Math.sqrt(3));
    expect(Math.min(...stretches)).toBeLessThan(1.001);
  });

  it('see half of all directions through the wall that a part lies close to', () => {
    // Source: closed form, the solid angle of a square plate of half side a at distance d: 4 arcsin(a²/(a² + d²)).
    const half = 100;
    const distance = 5;
    const box = cube(2 * half, [half - distance, 0, 0]) as Extract<ShieldInput, { kind: 'box' }>;
    const marked: ShieldInput = {
      ...box,
      box: { ...box.box, walls: [wall(1, 'Ta'), ...Array.from({ length: 5 }, () => wall(2))] },
    };
    const seen = pathsIn(marked, RAYS)
      .filter(({ walls }) => walls[0].layers[0].materialId === 'Ta')
      .reduce((sum, { weight }) => sum + weight, 0);
    const expected = (4 * Math.asin(half ** 2 / (half ** 2 + distance ** 2))) / (4 * Math.PI);
    expect(Math.abs(seen - expected)).toBeLessThan(2e-3);
  });

  it('cross a slab of any slant as its own cosine law says, where a box is so wide that one wall is all there is', () => {
    // Source: closed form. Over the half space in front of an endless slab cos θ is uniform, so that its mean is 1/2 and
    // the share of directions with sec θ below 2 is 1/2.
    const endless: ShieldInput = {
      kind: 'box',
      box: {
        innerSizeMm: [20_000, 20_000, 1],
        positionMm: [0, 0, 0],
        walls: [[], [], [], [], wall(2), wall(2)],
      },
    };
    const crossed = pathsIn(endless, RAYS).filter(({ walls }) => walls.length > 0);
    const below = crossed.filter(({ walls }) => walls[0].stretch < 2).length / RAYS;
    expect(crossed.length / RAYS).toBeGreaterThan(0.999);
    expect(Math.abs(below - 0.5)).toBeLessThan(QUADRATURE);
  });

  it('add the walls of nested boxes, outside first, each at its own slant', () => {
    // Source: closed form along +x: both walls square; along the diagonal of the inner cube: both at √3.
    const nested = cube(200) as Extract<ShieldInput, { kind: 'box' }>;
    const inner = {
      innerSizeMm: [40, 60, 80],
      positionMm: [0, 0, 0],
      walls: Array.from({ length: 6 }, () => wall(1, 'Ta')),
    };
    const paths = pathsIn({ ...nested, box: { ...nested.box, inner: inner as unknown as BoxInput } }, RAYS);
    for (const { walls } of paths) {
      expect(walls.map(({ layers }) => layers[0].materialId)).toEqual(['Al', 'Ta']);
      expect(Math.min(...walls.map(({ stretch }) => stretch))).toBeGreaterThanOrEqual(1);
    }
    expect(paths.some(({ walls }) => walls[0].stretch !== walls[1].stretch)).toBe(true);
    expect(paths.some(({ walls }) => walls[0].stretch === walls[1].stretch)).toBe(true);
  });
});
