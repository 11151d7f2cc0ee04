import { contentHash } from '../canonical.ts';
import { material } from '../matter/index.ts';
import { ELECTRON_EDGES_MEV } from '../numeric/spectrumGrid.ts';
import { CROSSING, DAMAGE, DIRECT, ELECTRON, FROM_PHOTONS, Kernel } from '../transport/kernel.ts';
import { protonResponse } from '../transport/protons.ts';
import { GY_PER_MEV_PER_G } from '../units.ts';
import { ENGINE_VERSION } from '../version.ts';
import { EFFORT, histories, type Progress, REFERENCE_VERSION, worstReferenceError } from './effort.ts';
import { aimAtCentre, aimedShare, aimSpread, sphereRadiusCm, TARGET_MM, transportOf } from './responsePlan.ts';
import { describeStack, normaliseStack, type Stack } from './stack.ts';
import type { EffortClass, ShieldResponse, StackInput, TargetMaterialId } from './types.ts';

export interface ResponseOptions {
  readonly effort: EffortClass;
  readonly targetMaterialId: TargetMaterialId;
  readonly seed: number;
}

/** Histories of one electron bin from one stream. */
export interface ShardPiece {
  readonly bin: number;
  /** Streams of a bin are numbered through all rounds. */
  readonly stream: number;
  readonly histories: number;
}

/** Some work of one response, with all it takes to run it elsewhere. */
export interface ShardTask {
  readonly stack: StackInput;
  readonly targetMaterialId: TargetMaterialId;
  readonly seed: number;
  readonly pieces: readonly ShardPiece[];
}

/** Sums over the histories of each piece of a shard. */
export interface ShardTally {
  readonly pieces: readonly ShardPiece[];
  /** Shape (pieces, TALLY_COLUMNS). */
  readonly sums: Float64Array;
}

/** Columns of a tally: sums, and sums of squares, over histories. */
const DOSE = 0;
const DOSE_SQUARE = 1;
const PHOTON_DOSE = 2;
const PHOTON_DOSE_SQUARE = 3;
const CROSSED = 4;
const CROSSED_SQUARE = 5;
const DAMAGED = 6;
/** Of direct and photon dose together: the two are not independent within a history. */
const BOTH_SQUARE = 7;
const COST = 8;
const TALLY_COLUMNS = 9;
const BINS = ELECTRON_EDGES_MEV.length - 1;
/** About as many shards a round, so that workers stay busy and a cancelled job stops soon. */
const SHARDS = 30;

/**
 * The next round of a response: first a few histories of every bin, then, by what the rounds before have found, as many as
 * make the dose of every reference spectrum as sure as the effort class asks. Streams hang on seed, bin and number alone,
 * and rounds on merged tallies, so that the result does not depend on who runs which shard.
 *
 * @param tallies - of all rounds so far, in the order of their tasks
 * @returns no task when the error is reached, or the cost allowed used up
 * @throws {AppError} STACK_INVALID, MATERIAL_UNKNOWN
 */
export function planRound(stack: StackInput, options: ResponseOptions, tallies: readonly ShardTally[]): ShardTask[] {
  normaliseStack(stack);
  const limits = EFFORT[options.effort];
  const sums = merged(tallies);
  const first = tallies.length === 0;
  const progress = progressOf(sums);
  const more = first ? new Float64Array(BINS).fill(limits.pilot) : histories(progress, limits);
  const cost = (bin: number) => more[bin] * (first ? 1 : progress.cost[bin]);
  const total = more.reduce((sum, _, bin) => sum + cost(bin), 0);
  const pieces: ShardPiece[] = [];
  for (let bin = 0; bin < BINS; bin++) {
    if (more[bin] === 0) continue;
    const cuts = Math.max(1, Math.ceil((cost(bin) * SHARDS) / total));
    for (let k = 0; k < cuts; k++) {
      const count = Math.floor(((k + 1) * more[bin]) / cuts) - Math.floor((k * more[bin]) / cuts);
      if (count > 0) pieces.push({ bin, stream: sums.streams[bin] + k, histories: count });
    }
  }
  const { targetMaterialId, seed } = options;
  return Array.from({ length: Math.min(SHARDS, pieces.length) }, (_, shard) => ({
    stack,
    targetMaterialId,
    seed,
    pieces: pieces.filter((_piece, index) => index % SHARDS === shard),
  }));
}

/** Share of a response that is done, by the cost of what the error still asks for; for progress only. */
export function doneShare(options: ResponseOptions, tallies: readonly ShardTally[]): number {
  if (tallies.length === 0) return 0;
  const progress = progressOf(merged(tallies));
  if (progress.histories.some((count) => count === 0)) return 0.05;
  const more = histories(progress, EFFORT[options.effort]);
  const sum = (counts: Float64Array) => counts.reduce((total, count, bin) => total + count * progress.cost[bin], 0);
  const done = sum(progress.histories);
  return done / (done + sum(more));
}

interface Merged {
  readonly histories: Float64Array;
  readonly streams: Int32Array;
  /** Shape (BINS, TALLY_COLUMNS). */
  readonly sums: Float64Array;
}

function merged(tallies: readonly ShardTally[]): Merged {
  const all = {
    histories: new Float64Array(BINS),
    streams: new Int32Array(BINS),
    sums: new Float64Array(BINS * TALLY_COLUMNS),
  };
  // Sums of doubles depend on their order: streams of a bin are added in the order of their numbers.
  const pieces = tallies.flatMap((tally) => tally.pieces.map((piece, index) => ({ piece, tally, index })));
  pieces.sort((a, b) => a.piece.bin - b.piece.bin || a.piece.stream - b.piece.stream);
  for (const { piece, tally, index } of pieces) {
    all.histories[piece.bin] += piece.histories;
    all.streams[piece.bin] += 1;
    for (let k = 0; k < TALLY_COLUMNS; k++) {
      all.sums[piece.bin * TALLY_COLUMNS + k] += tally.sums[index * TALLY_COLUMNS + k];
    }
  }
  return all;
}

function progressOf({ histories: n, sums }: Merged): Progress {
  const at = (bin: number, column: number) => sums[bin * TALLY_COLUMNS + column] / n[bin];
  const mean = n.map((_, bin) => at(bin, DOSE) + at(bin, PHOTON_DOSE));
  return {
    histories: n,
    mean,
    variance: n.map((count, bin) => (Math.max(0, at(bin, BOTH_SQUARE) - mean[bin] ** 2) * count) / (count - 1)),
    cost: n.map((_, bin) => at(bin, COST)),
  };
}

/** Runs the histories of one shard. */
export function runShard(task: ShardTask): ShardTally {
  const sums = new Float64Array(task.pieces.length * TALLY_COLUMNS);
  const aim = new Float64Array(2);
  const stack = normaliseStack(task.stack);
  const epsilon = aimSpread(stack);
  for (const [index, { bin, stream, histories: count }] of task.pieces.entries()) {
    const low = ELECTRON_EDGES_MEV[bin];
    const ratio = Math.log(ELECTRON_EDGES_MEV[bin + 1] / low);
    const { geometry, options } = transportOf(stack, task.targetMaterialId, low * Math.exp(ratio));
    const kernel = new Kernel(geometry, options);
    const { generator, score } = kernel;
    const share = aimedShare(stack, low * Math.exp(ratio));
    generator.start(task.seed, bin, stream);
    const at = index * TALLY_COLUMNS;
    for (let i = 0; i < count; i++) {
      const energy = low * Math.exp(ratio * generator.next());
      // Isotropic fluence: crossings of the outer face follow the cosine law.
      if (geometry.spherical) {
        aimAtCentre(epsilon, share, generator.next(), generator.next(), aim);
        kernel.history(ELECTRON, energy, aim[0], aim[1]);
      } else kernel.history(ELECTRON, energy, Math.sqrt(generator.next()));
      const dose = score[DIRECT];
      const photonDose = score[FROM_PHOTONS];
      sums[at + DOSE] += dose;
      sums[at + DOSE_SQUARE] += dose * dose;
      sums[at + PHOTON_DOSE] += photonDose;
      sums[at + PHOTON_DOSE_SQUARE] += photonDose * photonDose;
      sums[at + CROSSED] += score[CROSSING];
      sums[at + CROSSED_SQUARE] += score[CROSSING] ** 2;
      sums[at + DAMAGED] += score[DAMAGE];
      sums[at + BOTH_SQUARE] += (dose + photonDose) ** 2;
    }
    sums[at + COST] = kernel.steps + kernel.flights;
  }
  return { pieces: task.pieces, sums };
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
  const all = merged(tallies);
  for (let bin = 0; bin < BINS; bin++) {
    const n = all.histories[bin];
    if (n === 0) continue;
    const mean = (column: number) => all.sums[bin * TALLY_COLUMNS + column] / n;
    const sigma = (column: number) => Math.sqrt(Math.max(0, mean(column + 1) - mean(column) ** 2) / (n - 1));
    electron.doseGyCm2[bin] = toGy * mean(DOSE);
    electron.doseSigmaGyCm2[bin] = toGy * sigma(DOSE);
    electron.bremsstrahlungGyCm2[bin] = toGy * mean(PHOTON_DOSE);
    electron.bremsstrahlungSigmaGyCm2[bin] = toGy * sigma(PHOTON_DOSE);
    electron.transmitted[bin] = perArea * mean(CROSSED);
    electron.transmittedSigma[bin] = perArea * sigma(CROSSED);
    electron.damageMeVCm2PerG[bin] = perGram * mean(DAMAGED);
  }
  const referenceErrorRel = worstReferenceError(progressOf(all));
  const proton = protonResponse(checked.geometry === 'slab' ? 'slab' : 'sphere', checked.layers, target, sizeGPerCm2);
  return {
    sha256: responseKey(stack, options),
    engineVersion: ENGINE_VERSION,
    effort: options.effort,
    referenceErrorRel,
    targetMaterialId: options.targetMaterialId,
    description: `${describeStack(checked)}; ${targetText(checked, options.targetMaterialId)}`,
    electron,
    proton,
    notices: noticesOf(describeStack(checked), referenceErrorRel, options.effort),
  };
}

/** What a reader of doses behind a shield must know of its response. */
export function noticesOf(shieldText: string, referenceErrorRel: number, effort: EffortClass): string[] {
  const nuclear = 'Protons slow down along straight paths; nuclear reactions are not included.';
  if (referenceErrorRel <= REACHED * EFFORT[effort].errorRel) return [nuclear];
  return [
    nuclear,
    `Behind ${shieldText} the statistical error of the dose reached ${(100 * referenceErrorRel).toPrecision(2)} % in the least sure of the reference spectra within the effort allowed.`,
  ];
}

/** An error this many times the one asked for counts as reached: variances are estimates. */
const REACHED = 1.1;

function targetText({ geometry }: Stack, targetMaterialId: string): string {
  switch (geometry) {
    case 'slab':
      return `target ${TARGET_MM} mm of ${targetMaterialId} behind it; isotropic fluence on the outer face, slant paths carried as they are`;
    case 'sphere':
      return `target a ball of ${targetMaterialId} of ${TARGET_MM} mm radius at its centre; isotropic fluence, electrons carried as they scatter, protons straight ahead`;
    case 'shell':
      return `target a ball of ${targetMaterialId} of ${TARGET_MM} mm radius at the centre of the cavity; isotropic fluence, electrons carried as they scatter, protons straight ahead`;
  }
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
    referenceVersion: REFERENCE_VERSION,
    ...options,
    geometry,
    backing,
    innerRadiusMm,
    layers: layers.map((layer) => [layer.material.id, layer.arealDensityGPerCm2]),
  });
}

/** The whole response in one go. */
export function shieldResponse(stack: StackInput, options: ResponseOptions): ShieldResponse {
  const tallies: ShardTally[] = [];
  for (;;) {
    const tasks = planRound(stack, options, tallies);
    if (tasks.length === 0) return finishResponse(stack, options, tallies);
    for (const task of tasks) tallies.push(runShard(task));
  }
}
