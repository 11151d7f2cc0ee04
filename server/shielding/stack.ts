import { AppError, type ErrorPlace } from '../errors.ts';
import { type Material, material } from '../matter/index.ts';
import { arealDensityGPerCm2, MM_PER_MIL } from '../units.ts';
import type { Backing, LayerInput, StackGeometry, StackInput } from './types.ts';

/** Most layers of one stack, and the limits of one layer and of the whole. */
export const MAX_LAYERS = 20;
export const THICKNESS_LIMITS_MM = [1e-4, 500] as const;
export const MAX_STACK_G_PER_CM2 = 200;

export interface Layer {
  readonly material: Material;
  readonly thicknessMm: number;
  readonly arealDensityGPerCm2: number;
}

/** A checked stack, outside first, every layer in all units. */
export interface Stack {
  readonly geometry: StackGeometry;
  readonly backing: Backing;
  readonly innerRadiusMm: number | null;
  readonly layers: readonly Layer[];
  readonly arealDensityGPerCm2: number;
}

/**
 * Checks a stack as entered and turns every layer into all three units.
 *
 * @param pointer - JSON pointer of the stack in the request, for the places of a refusal
 * @throws {AppError} STACK_INVALID naming every faulty field; MATERIAL_UNKNOWN
 */
export function normaliseStack(input: StackInput, pointer = '#'): Stack {
  const places: ErrorPlace[] = [];
  if (input.layers.length === 0 || input.layers.length > MAX_LAYERS) {
    places.push({
      pointer: `${pointer}/layers`,
      detail: `a stack has 1 to ${MAX_LAYERS} layers`,
      got: input.layers.length,
      limit: MAX_LAYERS,
    });
  }
  if (input.geometry === 'shell' && !(input.innerRadiusMm !== undefined && input.innerRadiusMm > 0.1)) {
    places.push({
      pointer: `${pointer}/innerRadiusMm`,
      detail: 'a shell needs an inner radius above that of its target',
      got: input.innerRadiusMm ?? null,
      limit: 0.1,
      unit: 'mm',
    });
  }
  const layers = input.layers.map((layer, index) => normaliseLayer(layer, `${pointer}/layers/${index}`, places));
  const total = layers.reduce((sum, layer) => sum + (layer?.arealDensityGPerCm2 ?? 0), 0);
  if (total > MAX_STACK_G_PER_CM2) {
    places.push({
      pointer: `${pointer}/layers`,
      detail: 'the whole stack is too thick to be carried through',
      got: total,
      limit: MAX_STACK_G_PER_CM2,
      unit: 'g/cm²',
    });
  }
  if (places.length > 0) {
    const first = places[0];
    const got =
      first.got === undefined || first.got === null ? '' : ` (got ${first.got}${first.unit ? ` ${first.unit}` : ''})`;
    throw new AppError('STACK_INVALID', `${first.pointer}: ${first.detail}${got}.`, places);
  }
  return {
    geometry: input.geometry,
    backing: input.backing ?? 'none',
    innerRadiusMm: input.geometry === 'shell' ? (input.innerRadiusMm ?? null) : null,
    layers: layers as Layer[],
    arealDensityGPerCm2: total,
  };
}

function normaliseLayer(layer: LayerInput, pointer: string, places: ErrorPlace[]): Layer | null {
  const of = material(layer.materialId, `${pointer}/materialId`);
  const given = (['thicknessMm', 'thicknessMil', 'arealDensityGPerCm2'] as const).filter(
    (key) => layer[key] !== undefined,
  );
  if (given.length !== 1) {
    places.push({
      pointer,
      detail: 'exactly one of thicknessMm, thicknessMil and arealDensityGPerCm2 is needed',
      got: given.length,
      limit: 1,
    });
    return null;
  }
  const [key] = given;
  const value = layer[key] as number;
  const thicknessMm =
    key === 'thicknessMm'
      ? value
      : key === 'thicknessMil'
        ? value * MM_PER_MIL
        : value / arealDensityGPerCm2(1, of.densityGPerCm3);
  const [low, high] = THICKNESS_LIMITS_MM;
  if (!(thicknessMm >= low && thicknessMm <= high)) {
    places.push({
      pointer: `${pointer}/${key}`,
      detail: `a layer is ${low} to ${high} mm thick`,
      got: Number.isFinite(value) ? value : String(value),
      limit: value > 0 ? high : low,
      unit: key === 'arealDensityGPerCm2' ? 'g/cm²' : key === 'thicknessMil' ? 'mil' : 'mm',
    });
    return null;
  }
  return { material: of, thicknessMm, arealDensityGPerCm2: arealDensityGPerCm2(thicknessMm, of.densityGPerCm3) };
}

/** Mass of a stack over a flat area, kg. */
export function massOverAreaKg(stack: Stack, areaM2: number): number {
  return stack.arealDensityGPerCm2 * areaM2 * 10;
}

/** Thickness of aluminium with the same areal density, mm: for orientation and for sources given behind aluminium. */
export function aluminiumEquivalentMm(stack: Stack): number {
  return stack.arealDensityGPerCm2 / arealDensityGPerCm2(1, material('Al').densityGPerCm3);
}

/** One line for tables and reports: layers outside first, each in mm, mil and g/cm². */
export function describeStack(stack: Stack): string {
  const layers = stack.layers
    .map(
      (layer) =>
        `${layer.material.id} ${digits(layer.thicknessMm)} mm (${digits(layer.thicknessMm / MM_PER_MIL)} mil, ${digits(layer.arealDensityGPerCm2)} g/cm²)`,
    )
    .join(' + ');
  const shape =
    stack.geometry === 'slab'
      ? `slab, ${stack.backing === 'same' ? 'backed by its last material' : 'open behind'}`
      : stack.geometry === 'sphere'
        ? 'solid sphere'
        : `spherical shell of inner radius ${digits(stack.innerRadiusMm ?? 0)} mm`;
  return `${layers}; ${shape}`;
}

function digits(value: number): string {
  return Number(value.toPrecision(3)).toString();
}
