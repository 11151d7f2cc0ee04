import { contentHash } from '../canonical.ts';
import { AppError } from '../errors.ts';
import { material } from '../matter/index.ts';
import { ELECTRON_EDGES_MEV } from '../numeric/spectrumGrid.ts';
import { CROSSING, DAMAGE, DIRECT, ELECTRON, FROM_PHOTONS, Kernel } from '../transport/kernel.ts';
import { protonResponse } from '../transport/protons.ts';
import { GY_PER_MEV_PER_G } from '../units.ts';
import { ENGINE_VERSION } from '../version.ts';
import { aimAtCentre, sphereRadiusCm, TARGET_MM, transportOf } from './responsePlan.ts';
import { describeStack, normaliseStack, type Stack } from './stack.ts';
import type { EffortClass, ShieldResponse, StackInput, TargetMaterialId } from './types.ts';

export interface ResponseOptions {
  readonly effort: EffortClass;
  readonly targetMaterialId: TargetMaterialId;
  readonly seed: number;
}

/** A few electron bins of one response, with all it takes to run them elsewhere. */
export interface ShardTask {
  readonly stack: StackInput;
  readonly targetMaterialId: TargetMaterialId;
  readonly seed: number;
  readonly bins: readonly number[];
  readonly histories: readonly number[];
}

/** Sums over the histories of each bin of a shard, in the order of its bins. */
export interface ShardTally {
  readonly bins: readonly number[];
  readonly histories: readonly number[];
  /** Shape (bins, TALLY_COLUMNS). */
  readonly sums: Float64Array;
}

/** Sum and sum of squares of direct, photon-born, crossing; sum of damage. */
const TALLY_COLUMNS = 7;
const BINS = ELECTRON_EDGES_MEV.length - 1;
const SHARDS = 30;
/** Histories of a bin; bins above the knee of their cost get fewer, see `historiesOf`. */
const HISTORIES: Readonly<Record<EffortClass, number>> = { standard: 3000, fine: 40_000 };
/** Spheres have a target a thousandth of the size: their histories are cheaper and tell less. */
const SPHERE_FACTOR = 3;
/** Above this energy the cost of a history grows while belts thin out, MeV. */
const FULL_BELOW_MEV = 8;

/**
 * The work of one response: bins dealt out in turn, so that shards cost about the same. Streams hang on seed and bin
 * alone, so that the result does not depend on who runs which shard.
 *
 * @throws {AppError} STACK_INVALID, MATERIAL_UNKNOWN, RESPONSE_UNSUPPORTED
 */
export function planResponse(stack: StackInput, options: ResponseOptions): ShardTask[] {
  normaliseStack(stack);
  refuseUnsupported(stack);
  const { targetMaterialId, seed, effort } = options;
  const full = HISTORIES[effort] * (stack.geometry === 'sphere' ? SPHERE_FACTOR : 1);
  return Array.from({ length: SHARDS }, (_, shard) => {
    const bins = Array.from({ length: BINS }, (_, bin) => bin).filter((bin) => bin % SHARDS === shard);
    return { stack, targetMaterialId, seed, bins, histories: bins.map((bin) => historiesOf(bin, full)) };
  });
}

function historiesOf(bin: number, full: number): number {
  const middle = Math.sqrt(ELECTRON_EDGES_MEV[bin] * ELECTRON_EDGES_MEV[bin + 1]);
  return Math.ceil(full * Math.min(1, FULL_BELOW_MEV / middle));
}

function refuseUnsupported(stack: StackInput): void {
  if (stack.geometry !== 'shell') return;
  throw new AppError(
    'RESPONSE_UNSUPPORTED',
    'Electrons are carried through slabs and solid spheres; geometry "shell" has no electron response. Give the stack as a solid sphere or as a slab.',
    [{ pointer: '#/geometry', detail: 'no electron response for this geometry', got: 'shell', limit: 'slab, sphere' }],
  );
}

/** Runs the histories of one shard. */
export function runShard(task: ShardTask): ShardTally {
  const sums = new Float64Array(task.bins.length * TALLY_COLUMNS);
  const aim = new Float64Array(2);
  const epsilon = (0.1 * TARGET_MM) ** 2 / sphereRadiusCm(normaliseStack(task.stack)) ** 2;
  for (const [index, bin] of task.bins.entries()) {
    const low = ELECTRON_EDGES_MEV[bin];
    const ratio = Math.log(ELECTRON_EDGES_MEV[bin + 1] / low);
    const { geometry, options } = transportOf(task.stack, task.targetMaterialId, low * Math.exp(ratio / 2));
    const kernel = new Kernel(geometry, options);
    const { generator, score } = kernel;
    generator.start(task.seed, bin, 0);
    const at = index * TALLY_COLUMNS;
    for (let i = 0; i < task.histories[index]; i++) {
      const energy = low * Math.exp(ratio * generator.next());
      // Isotropic fluence: crossings of the outer face follow the cosine law.
      if (geometry.spherical) {
        aimAtCentre(epsilon, generator.next(), generator.next(), aim);
        kernel.history(ELECTRON, energy, aim[0], aim[1]);
      } else kernel.history(ELECTRON, energy, Math.sqrt(generator.next()));
      sums[at] += score[DIRECT];
      sums[at + 1] += score[DIRECT] ** 2;
      sums[at + 2] += score[FROM_PHOTONS];
      sums[at + 3] += score[FROM_PHOTONS] ** 2;
      sums[at + 4] += score[CROSSING];
      sums[at + 5] += score[CROSSING] ** 2;
      sums[at + 6] += score[DAMAGE];
    }
  }
  return { bins: task.bins, histories: task.histories, sums };
}

/** Puts the tallies of all shards together, adds the protons; bit-identical for any order of work. */
export function finishResponse(
  stack: StackInput,
  options: ResponseOptions,
  tallies: readonly ShardTally[],
): ShieldResponse {
  const target = material(options.targetMaterialId);
  const checked = normaliseStack(stack);
  const sizeGPerCm2 = 0.1 * TARGET_MM * target.densityGPerCm3;
  const electron = {
    doseGyCm2: new Float64Array(BINS),
    doseSigmaGyCm2: new Float64Array(BINS),
    bremsstrahlungGyCm2: new Float64Array(BINS),
    bremsstrahlungSigmaGyCm2: new Float64Array(BINS),
    transmitted: new Float64Array(BINS),
    transmittedSigma: new Float64Array(BINS),
    damageMeVCm2PerG: new Float64Array(BINS),
  };
  const { perGram, perArea } = perFluence(checked, target.densityGPerCm3);
  const toGy = perGram * GY_PER_MEV_PER_G;
  for (const { bins, histories, sums } of tallies) {
    for (const [index, bin] of bins.entries()) {
      const at = index * TALLY_COLUMNS;
      const n = histories[index];
      const sigma = (column: number) =>
        Math.sqrt(Math.max(0, sums[at + column + 1] / n - (sums[at + column] / n) ** 2) / (n - 1));
      electron.doseGyCm2[bin] = (toGy * sums[at]) / n;
      electron.doseSigmaGyCm2[bin] = toGy * sigma(0);
      electron.bremsstrahlungGyCm2[bin] = (toGy * sums[at + 2]) / n;
      electron.bremsstrahlungSigmaGyCm2[bin] = toGy * sigma(2);
      electron.transmitted[bin] = (perArea * sums[at + 4]) / n;
      electron.transmittedSigma[bin] = perArea * sigma(4);
      electron.damageMeVCm2PerG[bin] = (perGram * sums[at + 6]) / n;
    }
  }
  const proton = protonResponse(checked.geometry === 'slab' ? 'slab' : 'sphere', checked.layers, target, sizeGPerCm2);
  return {
    sha256: responseKey(stack, options),
    engineVersion: ENGINE_VERSION,
    effort: options.effort,
    targetMaterialId: options.targetMaterialId,
    description:
      checked.geometry === 'slab'
        ? `${describeStack(checked)}; target ${TARGET_MM} mm of ${options.targetMaterialId} behind it; isotropic fluence on the outer face, slant paths carried as they are`
        : `${describeStack(checked)}; target a ball of ${options.targetMaterialId} of ${TARGET_MM} mm radius at its centre; isotropic fluence, electrons carried as they scatter, protons straight ahead`,
    electron,
    proton,
    notices: [
      'Protons slow down along straight paths; nuclear reactions are not included.',
      ...(checked.geometry === 'sphere'
        ? ['Spheres carry larger statistical errors than slabs, above all where only bremsstrahlung is left.']
        : []),
    ],
  };
}

/** What a sum per history becomes per unit 4π-integrated fluence: per gram of the target, and per cm² of its surface. */
function perFluence(stack: Stack, targetDensityGPerCm3: number): { perGram: number; perArea: number } {
  const size = 0.1 * TARGET_MM;
  // A unit fluence crosses a plane face 1/4 times per cm², and enters a sphere πR² times.
  if (stack.geometry === 'slab') return { perGram: 0.25 / (size * targetDensityGPerCm3), perArea: 0.25 };
  const entering = Math.PI * sphereRadiusCm(stack) ** 2;
  return {
    perGram: entering / ((4 / 3) * Math.PI * size ** 3 * targetDensityGPerCm3),
    perArea: entering / (4 * Math.PI * size ** 2),
  };
}

/** Content address of a response: stack in areal densities, target, effort, seed, engine. */
export function responseKey(stack: StackInput, options: ResponseOptions): string {
  const { geometry, backing, innerRadiusMm, layers } = normaliseStack(stack);
  return contentHash({
    kind: 'shieldResponse',
    engineVersion: ENGINE_VERSION,
    ...options,
    geometry,
    backing,
    innerRadiusMm,
    layers: layers.map((layer) => [layer.material.id, layer.arealDensityGPerCm2]),
  });
}

/** The whole response in one go. */
export function shieldResponse(stack: StackInput, options: ResponseOptions): ShieldResponse {
  return finishResponse(stack, options, planResponse(stack, options).map(runShard));
}
