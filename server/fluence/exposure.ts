import { contentHash } from '../canonical.ts';
import { type FieldModelId, fieldLabeller, fieldModel, type MagneticLabeller } from '../field/index.ts';
import { type BeltModel, beltModel, kennelPetschekRatio, LONG_TERM_MEAN_OFFSET_DEX } from '../flux/index.ts';
import { ELECTRON_EDGES_MEV, PROTON_EDGES_MEV } from '../numeric/spectrumGrid.ts';
import type { Path } from '../trajectory/path.ts';
import { ENGINE_VERSION } from '../version.ts';
import { type FollowOptions, followPass, type PathSample } from './followPass.ts';
import { fluxHistory } from './history.ts';
import { binRegions, binSpread, energySigma, lBinEdges, lBinOf } from './lBins.ts';
import { findPasses, type Pass } from './passes.ts';
import type { FluenceSampling } from './percentiles.ts';
import { type ExposureSummary, summarise, type Thresholds } from './summary.ts';
import type { EnvironmentChoice, ExposureVariant, FluenceArtefact } from './types.ts';
import { exposureVariants, refuseOtherPlanet, rotationModelFor } from './variants.ts';

const N_ELECTRON = ELECTRON_EDGES_MEV.length;
const N_PROTON = PROTON_EDGES_MEV.length;
/** The measure that ranks phases: omnidirectional electron fluence above this energy, what gets through thin shields. */
export const RANKING_THRESHOLD_MEV = 1;

export interface ExposureOptions extends FollowOptions {
  /** Default: the shipped map of the model, and tracing where none ships. */
  readonly labellerFor?: (id: FieldModelId) => MagneticLabeller;
  /** An uploaded belt table instead of a built-in model. */
  readonly belts?: BeltModel;
  readonly onProgress?: (share: number) => void;
  readonly signal?: AbortSignal;
  /** Thresholds of the integral fluxes in the summary, MeV. */
  readonly thresholdsMeV?: Thresholds;
  /** Draws of the percentiles in the summary. */
  readonly sampling?: FluenceSampling;
  /** Field models to follow the same path in at the nominal phase, for comparison only. */
  readonly compareFieldModelIds?: readonly FieldModelId[];
}

export interface Exposure {
  readonly artefact: FluenceArtefact;
  readonly summary: ExposureSummary;
}

/** The belt model an environment asks for, with its scenarios. */
export function beltsOf(environment: EnvironmentChoice): BeltModel {
  return beltModel(environment.beltModelId, {
    satelliteDips: environment.satelliteDips ?? false,
    protonUpperBound: environment.protonUpperBound ?? false,
    electronOffsetDex: environment.solarWindState === 'long-term-mean' ? LONG_TERM_MEAN_OFFSET_DEX : 0,
  });
}

/**
 * Content address of an exposure: the path, the environment, the belts, the engine, and the field maps that labelled it.
 *
 * @param mapKeys - by field model id; models that were traced are left out
 */
export function exposureKey(
  path: Path,
  environment: EnvironmentChoice,
  mapKeys: Readonly<Partial<Record<FieldModelId, string>>>,
  beltsSha256?: string,
): string {
  return contentHash({
    kind: 'exposure',
    engine: ENGINE_VERSION,
    path: path.inputsSha256,
    planet: path.planet,
    environment,
    mapKeys,
    belts: beltsSha256 ?? null,
  });
}

/**
 * Follows a path through the belts for every (field, rotation phase) of an environment.
 *
 * @param path - planet-centred, ICRF
 * @returns the fluences that doses are folded from, and the summary that people read
 * @throws {AppError} unknown or mismatched models, phase out of range; an abort of `signal` rethrows its reason
 */
export function computeExposure(path: Path, environment: EnvironmentChoice, options: ExposureOptions = {}): Exposure {
  const rotation = rotationModelFor(environment.rotationModelId, path.planet);
  const belts = options.belts ?? beltsOf(environment);
  const labellers = new Map<FieldModelId, MagneticLabeller>();
  const labellerFor = (id: FieldModelId): MagneticLabeller => {
    let labeller = labellers.get(id);
    if (labeller === undefined) {
      labeller = options.labellerFor?.(id) ?? fieldLabeller(fieldModel(id));
      labellers.set(id, labeller);
    }
    return labeller;
  };

  const variants = exposureVariants(environment, rotation, path.spans[0].startTdbS);
  const outerRadiusKm =
    belts.lMax * OUTER_SHARE * Math.max(...variants.map((v) => fieldModel(v.fieldModelId).referenceRadiusKm));
  const passes = findPasses(path, outerRadiusKm);
  const lEdges = lBinEdges(belts);
  const groups = groupSpans(passes);
  const expected = variants.length + (environment.phase.mode === 'sweep' ? 2 : 0);
  const rows: VariantRows[] = [];
  const samplesOf = (variant: ExposureVariant): PathSample[][] =>
    passes.map((pass) =>
      followPass(path, pass, rotation, variant.offsetDeg, labellerFor(variant.fieldModelId), belts, options),
    );
  const follow = (variant: ExposureVariant): VariantRows => {
    options.signal?.throwIfAborted();
    const row = accumulate(variant, samplesOf(variant), passes, groups.length, lEdges);
    rows.push(row);
    options.onProgress?.(Math.min(1, rows.length / expected));
    return row;
  };
  for (const variant of variants) follow(variant);
  if (environment.phase.mode === 'sweep') refineWorst(rows, follow);

  const nominalVariant = nominalIndex(rows, environment);
  // Samples of all variants would fill the memory; the nominal one is followed once more instead.
  const nominalSamples = samplesOf(rows[nominalVariant].variant);
  const compared = (options.compareFieldModelIds ?? []).map((id) => {
    refuseOtherPlanet(id, path.planet, 'compareFieldModelIds');
    const variant = { ...rows[nominalVariant].variant, fieldModelId: id, weight: 0, primary: false };
    const { electron, proton } = accumulate(variant, samplesOf(variant), passes, groups.length, lEdges);
    return { fieldModelId: id, electron: summedRows(electron, N_ELECTRON), proton: summedRows(proton, N_PROTON) };
  });
  const mapKeys: Partial<Record<FieldModelId, string>> = {};
  for (const [id, { mapKey }] of labellers) if (mapKey !== undefined) mapKeys[id] = mapKey;
  const artefact: FluenceArtefact = {
    inputsSha256: exposureKey(path, environment, mapKeys),
    planet: path.planet,
    beltModelId: belts.id,
    variants: rows.map((row) => row.variant),
    nominalVariant,
    groups,
    lEdges,
    spread: { electron: binSpread(belts, 'electron', lEdges), proton: binSpread(belts, 'proton', lEdges) },
    energySigmaDex: { electron: energySigma(belts, 'electron'), proton: energySigma(belts, 'proton') },
    electron: concatenate(rows.map((row) => row.electron)),
    proton: concatenate(rows.map((row) => row.proton)),
    regions: { electron: binRegions(belts, 'electron', lEdges), proton: binRegions(belts, 'proton', lEdges) },
    kennelPetschekRatio: Float64Array.from({ length: lEdges.length - 1 }, (_, bin) =>
      kennelPetschekRatio(belts, path.planet, Math.sqrt(lEdges[bin] * lEdges[bin + 1])),
    ),
    history: fluxHistory(nominalSamples),
  };
  return {
    artefact,
    summary: summarise(artefact, environment, rotation, nominalSamples, compared, options),
  };
}

/** No trapped particle is looked for further out than this many times the outermost L. */
const OUTER_SHARE = 1.1;

interface VariantRows {
  readonly variant: ExposureVariant;
  /** Index (group · nL + bin) · nEdges + edge, cm⁻² MeV⁻¹. */
  readonly electron: Float32Array;
  readonly proton: Float32Array;
  readonly ranking: number;
}

function accumulate(
  variant: ExposureVariant,
  samples: readonly (readonly PathSample[])[],
  passes: readonly Pass[],
  groupCount: number,
  lEdges: Float64Array,
): VariantRows {
  const bins = lEdges.length - 1;
  const electron = new Float64Array(groupCount * bins * N_ELECTRON);
  const proton = new Float64Array(groupCount * bins * N_PROTON);
  samples.forEach((followed, index) => {
    for (const sample of followed) {
      const bin = sample.reason === null ? lBinOf(lEdges, sample.lShell) : -1;
      if (bin < 0) continue;
      const row = passes[index].group * bins + bin;
      for (let k = 0; k < N_ELECTRON; k++) electron[row * N_ELECTRON + k] += sample.weightS * sample.electron[k];
      for (let k = 0; k < N_PROTON; k++) proton[row * N_PROTON + k] += sample.weightS * sample.proton[k];
    }
  });
  return {
    variant,
    electron: Float32Array.from(electron),
    proton: Float32Array.from(proton),
    ranking: rankingFluence(electron),
  };
}

/** All groups and L together, cm⁻² MeV⁻¹ at the edges of the grid. */
function summedRows(rows: Float32Array, nEdges: number): Float64Array {
  const out = new Float64Array(nEdges);
  for (let i = 0; i < rows.length; i++) out[i % nEdges] += rows[i];
  return out;
}

/** Electron fluence above RANKING_THRESHOLD_MEV over all groups and L, cm⁻². */
function rankingFluence(electron: Float64Array): number {
  const step = Math.log(ELECTRON_EDGES_MEV[1] / ELECTRON_EDGES_MEV[0]);
  let sum = 0;
  for (let i = 0; i < electron.length; i++) {
    const energy = ELECTRON_EDGES_MEV[i % N_ELECTRON];
    if (energy >= RANKING_THRESHOLD_MEV) sum += electron[i] * energy;
  }
  return sum * step;
}

/**
 * Looks between the nodes of a sweep for the worst phase: a parabola through the highest node and its neighbours gives
 * the next offset, twice. The refined offsets carry no weight, so they are shown but never drawn.
 */
function refineWorst(rows: VariantRows[], follow: (variant: ExposureVariant) => VariantRows): void {
  const swept = rows.filter((row) => row.variant.primary).sort((a, b) => a.variant.offsetDeg - b.variant.offsetDeg);
  if (swept.length < 4) return;
  let best = 0;
  for (let i = 1; i < swept.length; i++) if (swept[i].ranking > swept[best].ranking) best = i;
  if (!(swept[best].ranking > 0)) return;
  const spacing = 360 / swept.length;
  const centre = swept[best].variant.offsetDeg;
  let left = { x: -spacing, y: swept[(best + swept.length - 1) % swept.length].ranking };
  let middle = { x: 0, y: swept[best].ranking };
  let right = { x: spacing, y: swept[(best + 1) % swept.length].ranking };
  for (let step = 0; step < 2; step++) {
    const x = parabolaTop(left, middle, right);
    if (Math.abs(x - middle.x) < 0.05) return;
    const offsetDeg = (((centre + x) % 360) + 360) % 360;
    const row = follow({ fieldModelId: swept[best].variant.fieldModelId, offsetDeg, weight: 0, primary: true });
    const point = { x, y: row.ranking };
    if (point.y > middle.y) {
      if (x > middle.x) left = middle;
      else right = middle;
      middle = point;
    } else if (x > middle.x) right = point;
    else left = point;
  }
}

interface Point {
  readonly x: number;
  readonly y: number;
}

function parabolaTop(a: Point, b: Point, c: Point): number {
  const left = (b.x - a.x) * (b.y - c.y);
  const right = (b.x - c.x) * (b.y - a.y);
  const top = b.x - 0.5 * (((b.x - a.x) * left - (b.x - c.x) * right) / (left - right));
  return Number.isFinite(top) ? Math.min(Math.max(top, a.x), c.x) : b.x;
}

/** Published or given offset: that variant. Drawn or swept: the variant of median fluence of the chosen field. */
function nominalIndex(rows: readonly VariantRows[], environment: EnvironmentChoice): number {
  const chosen = rows
    .map((row, index) => ({ row, index }))
    .filter(({ row }) => row.variant.fieldModelId === environment.fieldModelId && row.variant.weight > 0)
    .sort((a, b) => a.row.ranking - b.row.ranking || a.index - b.index);
  return chosen[Math.floor(chosen.length / 2)].index;
}

function groupSpans(passes: readonly Pass[]): { startTdbS: number; stopTdbS: number }[] {
  const groups: { startTdbS: number; stopTdbS: number }[] = [];
  for (const pass of passes) {
    const group = groups[pass.group];
    if (group === undefined) groups[pass.group] = { startTdbS: pass.startTdbS, stopTdbS: pass.stopTdbS };
    else group.stopTdbS = pass.stopTdbS;
  }
  return groups;
}

function concatenate(parts: readonly Float32Array[]): Float32Array {
  const out = new Float32Array(parts.reduce((sum, part) => sum + part.length, 0));
  let at = 0;
  for (const part of parts) {
    out.set(part, at);
    at += part.length;
  }
  return out;
}
