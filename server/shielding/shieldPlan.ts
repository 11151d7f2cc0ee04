import { AppError, type ErrorPlace } from '../errors.ts';
import { type Crossing, crossings, placedBoxes } from './box.ts';
import { equalAreaDirections } from './directions.ts';
import { describeStack, normaliseStack } from './stack.ts';
import type { BoxInput, LayerInput, ShieldInput, SpotShield, StackInput } from './types.ts';

/** Shares of sectors may miss 1 by this much. */
const CLOSURE = 1e-6;
/** Slants beyond this count as this: they are rare, and what they hide counts more than it should. */
const MAX_STRETCH = 12;
/** Step between the responses that paths are interpolated from: a factor in thickness. */
export const NODE_RATIO = 1.3;
/** Rays that the responses are planned for; no shield needs more. */
export const MAX_RAYS = 4096;
const DEFAULT_RAYS = 512;
const MIN_RAYS = 64;
/** Responses that one shield may need. */
const MAX_NODES = 60;

/** One way in from outside: a share of 4π behind walls, each as thick as the ray finds it. */
export interface PathIn {
  readonly weight: number;
  /** Walls outside first; all of them at stretch 1 make a path that needs no interpolation. */
  readonly walls: readonly { readonly layers: readonly LayerInput[]; readonly stretch: number }[];
  readonly geometry: StackInput['geometry'];
  readonly backing: 'none' | 'same';
  readonly innerRadiusMm: number | null;
}

/**
 * Checks a shield and says whether it is one stack, whose response is its own.
 *
 * @throws {AppError} SHIELD_INVALID, STACK_INVALID, MATERIAL_UNKNOWN
 */
export function plainStack(shield: ShieldInput, pointer = '#'): StackInput | null {
  checkShield(shield, pointer);
  if (shield.kind !== 'stack') return null;
  if (shield.spot === undefined) return shield.stack;
  if ((shield.spot.coveredFraction ?? 1) < 1) return null;
  return { ...shield.stack, layers: [...shield.stack.layers, ...shield.spot.layers] };
}

function checkShield(shield: ShieldInput, pointer: string): void {
  const places: ErrorPlace[] = [];
  if (shield.spot !== undefined) {
    normaliseStack({ geometry: 'slab', layers: shield.spot.layers }, `${pointer}/spot`);
    const covered = shield.spot.coveredFraction ?? 1;
    if (!(covered > 0 && covered <= 1)) {
      places.push({
        pointer: `${pointer}/spot/coveredFraction`,
        detail: 'share of all directions, above 0 and up to 1',
        got: covered,
        limit: 1,
      });
    }
  }
  switch (shield.kind) {
    case 'stack':
      normaliseStack(shield.stack, `${pointer}/stack`);
      break;
    case 'sectors': {
      let sum = 0;
      for (const [index, { fraction, stack }] of shield.sectors.entries()) {
        normaliseStack(stack, `${pointer}/sectors/${index}/stack`);
        if (!(fraction > 0 && fraction <= 1)) {
          places.push({
            pointer: `${pointer}/sectors/${index}/fraction`,
            detail: 'share of 4π, above 0 and up to 1',
            got: fraction,
            limit: 1,
          });
        }
        sum += fraction;
      }
      if (!(Math.abs(sum - 1) <= CLOSURE)) {
        places.push({
          pointer: `${pointer}/sectors`,
          detail: `the shares must sum to 1 within ${CLOSURE}`,
          got: sum,
          limit: 1,
        });
      }
      break;
    }
    case 'box': {
      placedBoxes(shield.box, `${pointer}/box`);
      const rays = shield.rays ?? DEFAULT_RAYS;
      if (!(Number.isInteger(rays) && rays >= MIN_RAYS && rays <= MAX_RAYS)) {
        places.push({
          pointer: `${pointer}/rays`,
          detail: `${MIN_RAYS} to ${MAX_RAYS} rays`,
          got: rays,
          limit: MAX_RAYS,
        });
      }
    }
  }
  if (places.length > 0) {
    throw new AppError('SHIELD_INVALID', `${places[0].pointer}: ${places[0].detail}; got ${places[0].got}.`, places);
  }
}

/** How many rays a shield is first followed with; 1 where none are needed. */
export function firstRays(shield: ShieldInput): number {
  return shield.kind === 'box' ? (shield.rays ?? DEFAULT_RAYS) : 1;
}

/** All ways in through a shield, weights summing to 1; boxes with `rays` equal-area directions. */
export function pathsIn(shield: ShieldInput, rays: number): PathIn[] {
  const outer = outerPaths(shield, rays);
  return shield.spot === undefined ? outer : outer.flatMap((path) => underSpot(path, shield.spot as SpotShield));
}

function outerPaths(shield: ShieldInput, rays: number): PathIn[] {
  switch (shield.kind) {
    case 'stack':
      return [stackPath(shield.stack, 1)];
    case 'sectors':
      return shield.sectors.map(({ fraction, stack }) => stackPath(stack, fraction));
    case 'box': {
      const boxes = placedBoxes(shield.box);
      const minimum = shield.pathRule === 'minimum';
      const innerRadiusMm = 0.5 * Math.min(...boxes[boxes.length - 1].box.innerSizeMm);
      const at = equalAreaDirections(rays);
      return Array.from({ length: rays }, (_, i) => {
        const crossed = crossings(boxes, at[3 * i], at[3 * i + 1], at[3 * i + 2]);
        return {
          weight: 1 / rays,
          walls: crossed.map(({ layers, stretch }: Crossing) => ({
            layers,
            stretch: minimum ? 1 : Math.min(stretch, MAX_STRETCH),
          })),
          geometry: minimum ? 'shell' : 'sphere',
          backing: 'none',
          innerRadiusMm: minimum ? innerRadiusMm : null,
        };
      });
    }
  }
}

function stackPath(stack: StackInput, weight: number): PathIn {
  return {
    weight,
    walls: [{ layers: stack.layers, stretch: 1 }],
    geometry: stack.geometry,
    backing: stack.backing ?? 'none',
    innerRadiusMm: stack.innerRadiusMm ?? null,
  };
}

function underSpot(path: PathIn, { layers, coveredFraction = 1 }: SpotShield): PathIn[] {
  const covered = {
    ...path,
    weight: path.weight * coveredFraction,
    walls: [...path.walls, { layers, stretch: 1 }],
  };
  return coveredFraction === 1 ? [covered] : [covered, { ...path, weight: path.weight * (1 - coveredFraction) }];
}

/** Nodes about one path with their shares, which sum to 1. */
export interface Blend {
  readonly weight: number;
  readonly nodes: readonly { readonly key: string; readonly share: number }[];
}

/**
 * Which responses a path lies between: the corners of a cell in the logarithms of the stretches of its walls; for walls of one
 * material all through, in the logarithm of the whole thickness. Walls met squarely need one response, their own. A path
 * through no wall at all has the thinnest layer that is carried, a film of polyethylene.
 */
export function blendOf(path: PathIn, nodes: Map<string, StackInput>): Blend {
  const { geometry, backing, innerRadiusMm } = path;
  const shape = {
    geometry,
    ...(backing === 'none' ? {} : { backing }),
    ...(innerRadiusMm === null ? {} : { innerRadiusMm }),
  };
  const known = (stack: StackInput): string => {
    const key = JSON.stringify(stack);
    if (!nodes.has(key)) nodes.set(key, stack);
    return key;
  };
  const walls = path.walls.length === 0 ? [{ layers: [OPEN], stretch: 1 }] : path.walls;
  if (walls.every(({ stretch }) => stretch === 1)) {
    const stack = { ...shape, layers: walls.flatMap(({ layers }) => layers) };
    return { weight: path.weight, nodes: [{ key: known(stack), share: 1 }] };
  }
  const only = onlyMaterial(walls.flatMap(({ layers }) => layers));
  if (only !== null) {
    const thicknessMm = walls.reduce((sum, { layers, stretch }) => sum + stretch * thicknessOf(layers), 0);
    const place = Math.log(thicknessMm) / Math.log(NODE_RATIO);
    const low = Math.floor(place);
    const at = (power: number) =>
      known({ ...shape, layers: [{ materialId: only, thicknessMm: nodeThicknessMm(power) }] });
    return {
      weight: path.weight,
      nodes: [
        { key: at(low), share: 1 - (place - low) },
        { key: at(low + 1), share: place - low },
      ],
    };
  }
  // Walls met at the same angle share one axis.
  const stretches = [...new Set(walls.map(({ stretch }) => stretch))];
  const places = stretches.map((stretch) => Math.log(stretch) / Math.log(NODE_RATIO));
  const corners: { key: string; share: number }[] = [];
  for (let corner = 0; corner < 2 ** places.length; corner++) {
    let share = 1;
    const scales = new Map<number, number>();
    for (const [axis, place] of places.entries()) {
      const low = Math.floor(place);
      const high = (corner >> axis) & 1;
      share *= high === 1 ? place - low : 1 - (place - low);
      scales.set(stretches[axis], NODE_RATIO ** (low + high));
    }
    if (share === 0) continue;
    const layers = walls.flatMap((wall) => scaled(wall.layers, scales.get(wall.stretch) as number));
    corners.push({ key: known({ ...shape, layers }), share });
  }
  return { weight: path.weight, nodes: corners };
}

/** Thickness that paths through one material alone are interpolated from, mm. */
export function nodeThicknessMm(power: number): number {
  return rounded(NODE_RATIO ** power);
}

/** What stands for an open way in: as thin as a layer may be. */
const OPEN: LayerInput = { materialId: 'polyethylene', thicknessMm: 1e-4 };
const DIGITS = 6;
const rounded = (value: number) => Number(value.toPrecision(DIGITS));

function thicknessOf(layers: readonly LayerInput[]): number {
  return normaliseStack({ geometry: 'slab', layers }).layers.reduce((sum, layer) => sum + layer.thicknessMm, 0);
}

function scaled(layers: readonly LayerInput[], factor: number): LayerInput[] {
  return normaliseStack({ geometry: 'slab', layers }).layers.map((layer) => ({
    materialId: layer.material.id,
    thicknessMm: rounded(layer.thicknessMm * factor),
  }));
}

function onlyMaterial(layers: readonly LayerInput[]): string | null {
  const [{ materialId }] = layers;
  return layers.every((layer) => layer.materialId === materialId) ? materialId : null;
}

/**
 * All responses that a shield needs, for any number of rays up to MAX_RAYS.
 *
 * @throws {AppError} RESPONSE_UNSUPPORTED when there are too many, or one is too thick to be carried through
 */
export function nodesOf(shield: ShieldInput): StackInput[] {
  const nodes = new Map<string, StackInput>();
  for (const path of pathsIn(shield, shield.kind === 'box' ? MAX_RAYS : 1)) blendOf(path, nodes);
  if (nodes.size > MAX_NODES) {
    throw new AppError(
      'RESPONSE_UNSUPPORTED',
      `This shield needs responses of ${nodes.size} different stacks; the limit is ${MAX_NODES}. Make walls alike, or use fewer boxes inside each other.`,
      [{ detail: 'different stacks', got: nodes.size, limit: MAX_NODES }],
    );
  }
  try {
    for (const stack of nodes.values()) normaliseStack(stack);
  } catch (error) {
    if (!(error instanceof AppError)) throw error;
    throw new AppError(
      'RESPONSE_UNSUPPORTED',
      `A slant path through this shield is too thick to be carried through: ${error.message}`,
      error.places,
    );
  }
  return [...nodes.values()];
}

/** One line for tables and reports. */
export function describeShield(shield: ShieldInput): string {
  const spot =
    shield.spot === undefined
      ? ''
      : `; spot shield over the part: ${layersText(shield.spot.layers)}, covering ${percent(shield.spot.coveredFraction ?? 1)} of all directions`;
  switch (shield.kind) {
    case 'stack':
      return describeStack(normaliseStack(shield.stack)) + spot;
    case 'sectors':
      return `${shield.sectors.length} sectors: ${shield.sectors
        .map(
          ({ name, fraction, stack }) =>
            `${percent(fraction)}${name === undefined ? '' : ` (${name})`} behind ${describeStack(normaliseStack(stack))}`,
        )
        .join(' | ')}${spot}`;
    case 'box':
      return `${boxText(shield.box)}; ${shield.pathRule === 'minimum' ? 'minimum paths, hollow shell responses' : 'slant paths, solid sphere responses'}${spot}`;
  }
}

const WALLS = ['+x', '−x', '+y', '−y', '+z', '−z'];

function boxText(outer: BoxInput): string {
  const at = outer.positionMm.map((mm) => rounded3(mm)).join(', ');
  const texts = outer.walls.map(layersText);
  const alike = texts.every((text) => text === texts[0]);
  const walls = alike ? `all of ${texts[0]}` : WALLS.map((wall, i) => `${wall} ${texts[i]}`).join(', ');
  const size = outer.innerSizeMm.map((mm) => rounded3(mm)).join(' × ');
  const held = outer.inner === undefined ? `part at (${at}) mm` : `at (${at}) mm in it a ${boxText(outer.inner)}`;
  return `box of ${size} mm inside with walls ${walls}; ${held}`;
}
function layersText(layers: readonly LayerInput[]): string {
  if (layers.length === 0) return 'open';
  return normaliseStack({ geometry: 'slab', layers })
    .layers.map((layer) => `${layer.material.id} ${rounded3(layer.thicknessMm)} mm`)
    .join(' + ');
}

const rounded3 = (value: number) => Number(value.toPrecision(3)).toString();
const percent = (share: number) => `${rounded3(100 * share)} %`;
