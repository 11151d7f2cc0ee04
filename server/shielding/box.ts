import { AppError, type ErrorPlace } from '../errors.ts';
import { normaliseStack } from './stack.ts';
import type { BoxInput, LayerInput } from './types.ts';

/** Most boxes inside each other. */
export const MAX_NESTED_BOXES = 3;
const AXES = ['x', 'y', 'z'] as const;

/** A wall that a ray crosses, and by how much its slant lengthens the way. */
export interface Crossing {
  readonly layers: readonly LayerInput[];
  /** Index of the box (0 is the outermost) and of its wall, in the order +x, −x, +y, −y, +z, −z. */
  readonly box: number;
  readonly wall: number;
  /** 1/cos of the angle to the wall's normal, ≥ 1. */
  readonly stretch: number;
}

/** Boxes from the outermost inward, each with where the part sits in it. */
interface PlacedBox {
  readonly box: BoxInput;
  readonly partMm: readonly [number, number, number];
}

/** Thickness of each wall, mm. */
function wallThicknesses(box: BoxInput): number[] {
  return box.walls.map((layers) =>
    layers.length === 0
      ? 0
      : normaliseStack({ geometry: 'slab', layers }).layers.reduce((sum, layer) => sum + layer.thicknessMm, 0),
  );
}

/**
 * The boxes of a nest, outermost first.
 *
 * @throws {AppError} SHIELD_INVALID naming each size, place or wall outside its limit; STACK_INVALID, MATERIAL_UNKNOWN
 */
export function placedBoxes(outer: BoxInput, pointer = '#'): PlacedBox[] {
  const places: ErrorPlace[] = [];
  const chain: BoxInput[] = [];
  for (let box: BoxInput | undefined = outer; box !== undefined; box = box.inner) chain.push(box);
  if (chain.length > MAX_NESTED_BOXES) {
    places.push({
      pointer,
      detail: `at most ${MAX_NESTED_BOXES} boxes inside each other`,
      got: chain.length,
      limit: MAX_NESTED_BOXES,
    });
  }
  let at = pointer;
  for (const [depth, box] of chain.entries()) {
    if (box.walls.length !== 6) {
      places.push({
        pointer: `${at}/walls`,
        detail: 'six walls: +x, −x, +y, −y, +z, −z',
        got: box.walls.length,
        limit: 6,
      });
    }
    for (const [index, layers] of box.walls.entries()) {
      if (layers.length > 0) normaliseStack({ geometry: 'slab', layers }, `${at}/walls/${index}`);
    }
    const inner = chain[depth + 1];
    const around = inner === undefined ? null : wallThicknesses(inner);
    for (const [axis, label] of AXES.entries()) {
      const size = box.innerSizeMm[axis];
      if (!(size > 0 && size <= MAX_SIZE_MM)) {
        places.push({
          pointer: `${at}/innerSizeMm/${axis}`,
          detail: `inner size along ${label}`,
          got: size,
          limit: MAX_SIZE_MM,
          unit: 'mm',
        });
        continue;
      }
      const position = box.positionMm[axis];
      const plus = inner === undefined ? 0 : inner.innerSizeMm[axis] / 2 + (around?.[2 * axis] ?? 0);
      const minus = inner === undefined ? 0 : inner.innerSizeMm[axis] / 2 + (around?.[2 * axis + 1] ?? 0);
      const what = inner === undefined ? 'the part' : 'the inner box with its walls';
      if (!(position + plus < size / 2 + TOUCH_MM && position - minus > -size / 2 - TOUCH_MM)) {
        places.push({
          pointer: `${at}/positionMm/${axis}`,
          detail: `${what} does not lie inside along ${label}`,
          got: position,
          limit: size / 2 - Math.max(plus, minus),
          unit: 'mm',
        });
      }
    }
    at = `${at}/inner`;
  }
  if (places.length > 0) {
    throw new AppError('SHIELD_INVALID', `${places[0].pointer}: ${places[0].detail}; got ${places[0].got}.`, places);
  }
  const partMm: [number, number, number] = [0, 0, 0];
  const placed: PlacedBox[] = [];
  for (const box of [...chain].reverse()) {
    for (let axis = 0; axis < 3; axis++) partMm[axis] += box.positionMm[axis];
    placed.unshift({ box, partMm: [...partMm] });
  }
  return placed;
}
const MAX_SIZE_MM = 20_000;
/** Walls may touch: sizes come from drawings and are rounded. */
const TOUCH_MM = 1e-6;

/**
 * The walls that a ray from the part crosses, outermost first. It leaves each box through the face it meets first; walls
 * without layers are left out.
 */
export function crossings(boxes: readonly PlacedBox[], x: number, y: number, z: number): Crossing[] {
  const direction = [x, y, z];
  const crossed: Crossing[] = [];
  for (const [index, { box, partMm }] of boxes.entries()) {
    let nearest = Number.POSITIVE_INFINITY;
    let wall = 0;
    for (let axis = 0; axis < 3; axis++) {
      const along = direction[axis];
      if (along === 0) continue;
      const face = (along > 0 ? 1 : -1) * 0.5 * box.innerSizeMm[axis];
      const distance = (face - partMm[axis]) / along;
      if (distance < nearest) {
        nearest = distance;
        wall = 2 * axis + (along > 0 ? 0 : 1);
      }
    }
    const layers = box.walls[wall];
    if (layers.length > 0) crossed.push({ layers, box: index, wall, stretch: 1 / Math.abs(direction[wall >> 1]) });
  }
  return crossed;
}

/** Mass of all walls, kg: plates over the inner faces, each widened by half the walls it meets; corners are left out. */
export function boxMassKg(outer: BoxInput): number {
  return placedBoxes(outer).reduce((sum, { box }) => {
    const thickness = wallThicknesses(box);
    const span = (axis: number) => box.innerSizeMm[axis] + 0.5 * (thickness[2 * axis] + thickness[2 * axis + 1]);
    return (
      sum +
      box.walls.reduce((mass, layers, wall) => {
        if (layers.length === 0) return mass;
        const [u, v] = [0, 1, 2].filter((axis) => axis !== wall >> 1);
        const areaM2 = span(u) * span(v) * 1e-6;
        return mass + normaliseStack({ geometry: 'slab', layers }).arealDensityGPerCm2 * areaM2 * 10;
      }, 0)
    );
  }, 0);
}
