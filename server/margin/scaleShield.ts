/** The same shield with every layer thinner or thicker, for the sensitivity to thickness. */
import type { BoxInput, LayerInput, ShieldInput, StackInput } from '../shielding/types.ts';

/** What the sensitivity is shown for. */
export const THINNER_FACTOR = 0.9;
export const THICKER_FACTOR = 1.1;

/**
 * Multiplies the thickness of every layer of a shield, in the unit it was entered in; inner sizes and places stay.
 *
 * @param factor - > 0
 */
export function scaleShield(shield: ShieldInput, factor: number): ShieldInput {
  if (!(Number.isFinite(factor) && factor > 0)) throw new TypeError(`factor must be above 0, got ${factor}`);
  const spot =
    shield.spot === undefined ? {} : { spot: { ...shield.spot, layers: scaleLayers(shield.spot.layers, factor) } };
  switch (shield.kind) {
    case 'stack':
      return { ...shield, ...spot, stack: scaleStack(shield.stack, factor) };
    case 'sectors':
      return {
        ...shield,
        ...spot,
        sectors: shield.sectors.map((sector) => ({ ...sector, stack: scaleStack(sector.stack, factor) })),
      };
    case 'box':
      return { ...shield, ...spot, box: scaleBox(shield.box, factor) };
  }
}

function scaleStack(stack: StackInput, factor: number): StackInput {
  return { ...stack, layers: scaleLayers(stack.layers, factor) };
}

function scaleLayers(layers: readonly LayerInput[], factor: number): LayerInput[] {
  return layers.map((layer) => ({
    ...layer,
    ...(layer.thicknessMm === undefined ? {} : { thicknessMm: layer.thicknessMm * factor }),
    ...(layer.thicknessMil === undefined ? {} : { thicknessMil: layer.thicknessMil * factor }),
    ...(layer.arealDensityGPerCm2 === undefined ? {} : { arealDensityGPerCm2: layer.arealDensityGPerCm2 * factor }),
  }));
}

function scaleBox(box: BoxInput, factor: number): BoxInput {
  return {
    ...box,
    walls: box.walls.map((layers) => scaleLayers(layers, factor)),
    ...(box.inner === undefined ? {} : { inner: scaleBox(box.inner, factor) }),
  };
}
