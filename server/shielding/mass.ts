import { boxMassKg } from './box.ts';
import { massOverAreaKg, normaliseStack } from './stack.ts';
import type { LayerInput, ShieldInput } from './types.ts';

/** What a plain stack covers or wraps; at most one of the three. A box has its own size. */
export interface Enclosed {
  readonly areaM2?: number;
  /** Inner size of a box that all its walls wrap with the stack, mm. */
  readonly innerBoxMm?: readonly [number, number, number];
  /** Inner radius of a sphere that the stack wraps, mm. */
  readonly innerSphereRadiusMm?: number;
}

/** Mass of a place's shield, kg; null where neither its geometry nor the place says how large all of it is. */
export function placeMassKg({ shield, ...enclosed }: Enclosed & { readonly shield: ShieldInput }): number | null {
  const own =
    shield.kind === 'box'
      ? boxMassKg(shield.box)
      : shield.kind === 'stack'
        ? massOf(shield.stack.layers, enclosed)
        : null;
  if (shield.spot === undefined || own === null) return own;
  const spot = massOf(shield.spot.layers, shield.spot);
  return spot === null ? null : own + spot;
}

/** Mass of layers over an area, round a box or round a sphere, kg. */
function massOf(layers: readonly LayerInput[], enclosed: Enclosed): number | null {
  if (enclosed.areaM2 !== undefined) {
    return massOverAreaKg(normaliseStack({ geometry: 'slab', layers }), enclosed.areaM2);
  }
  if (enclosed.innerBoxMm !== undefined) {
    return boxMassKg({
      innerSizeMm: enclosed.innerBoxMm,
      positionMm: [0, 0, 0],
      walls: Array.from({ length: 6 }, () => layers),
    });
  }
  if (enclosed.innerSphereRadiusMm !== undefined) return massRoundSphereKg(layers, enclosed.innerSphereRadiusMm);
  return null;
}

/** Closed spherical shells, innermost layer last. */
function massRoundSphereKg(layers: readonly LayerInput[], innerRadiusMm: number): number {
  let radiusCm = 0.1 * innerRadiusMm;
  let grams = 0;
  for (const layer of [...normaliseStack({ geometry: 'slab', layers }).layers].reverse()) {
    const outer = radiusCm + 0.1 * layer.thicknessMm;
    grams += (4 / 3) * Math.PI * (outer ** 3 - radiusCm ** 3) * layer.material.densityGPerCm3;
    radiusCm = outer;
  }
  return grams / 1000;
}
