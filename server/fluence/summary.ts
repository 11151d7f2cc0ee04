import { EVIDENCE_REGIONS, type EvidenceRegion } from '../flux/types.ts';
import { phaseSigmaDeg, type RotationModel } from '../frames/rotation.ts';
import { binIntegralsInto, edgesMeV, type Species } from '../numeric/spectrumGrid.ts';
import { formatUtc } from '../time/index.ts';
import type { PathSample } from './followPass.ts';
import { thinned } from './history.ts';
import { type FluencePercentiles, type FluenceSampling, fluencePercentiles } from './percentiles.ts';
import { integralFluence, variantEdges } from './spectra.ts';
import type { EnvironmentChoice, FluenceArtefact } from './types.ts';

export const DEFAULT_THRESHOLDS_MEV: readonly number[] = [0.1, 0.5, 1, 2, 5, 10];
const HISTORY_POINTS = 1000;
const DEFAULT_SAMPLING: FluenceSampling = { draws: 1000, seed: 1 };

export type Thresholds = Readonly<Partial<Record<Species, readonly number[]>>>;

/** What people read of an exposure; JSON. Fluences cm⁻², fluxes cm⁻² s⁻¹, omnidirectional. */
export interface ExposureSummary {
  readonly environment: EnvironmentChoice;
  readonly beltModelId: string;
  /** 1 σ of the rotation phase at arrival from the model's period error, degrees. */
  readonly phaseSigmaDeg: number;
  /** Of the electrons; `thresholdsBySpeciesMeV` holds both. */
  readonly thresholdsMeV: readonly number[];
  readonly thresholdsBySpeciesMeV: Readonly<Record<Species, readonly number[]>>;
  /** Over belts, rotation phase and field model drawn together. */
  readonly percentiles: FluencePercentiles;
  /** The same path and phase in the chosen and in other field models, median belts; per threshold. */
  readonly fieldComparison: readonly {
    readonly fieldModelId: string;
    readonly electronPerCm2: readonly number[];
    readonly protonPerCm2: readonly number[];
  }[];
  readonly passCount: number;
  readonly nominal: { readonly fieldModelId: string; readonly offsetDeg: number };
  readonly species: Readonly<Record<Species, SpeciesSummary>>;
  /** One entry per (field, offset) that was followed. */
  readonly byPhase: readonly {
    readonly fieldModelId: string;
    readonly offsetDeg: number;
    readonly primary: boolean;
    readonly refined: boolean;
    /** Per threshold. */
    readonly electronPerCm2: readonly number[];
    readonly protonPerCm2: readonly number[];
  }[];
  /** Electrons above 1 MeV over the phases of the chosen field: 5th, 50th, 95th percentile, and the worst offset. */
  readonly phaseBand: { readonly p05PerCm2: number; readonly p50PerCm2: number; readonly p95PerCm2: number };
  readonly worstPhase: { readonly offsetDeg: number; readonly electronAbove1MeVPerCm2: number };
  /** Nominal variant, thinned to at most 1000 points. */
  readonly history: {
    readonly utc: readonly string[];
    readonly epochTdbS: readonly number[];
    readonly lShell: readonly (number | null)[];
    readonly electronAbovePerCm2S: readonly (readonly number[])[];
    readonly protonAbovePerCm2S: readonly (readonly number[])[];
  };
  /** Hours round the peak that bring 90 % of the nominal electron fluence above 1 MeV. */
  readonly hoursOf90Percent: number;
}

export interface SpeciesSummary {
  readonly energiesMeV: readonly number[];
  readonly differentialPerCm2MeV: readonly number[];
  readonly integralPerCm2: readonly number[];
  readonly fluencePerCm2: readonly number[];
  readonly peaks: readonly {
    readonly thresholdMeV: number;
    readonly fluxPerCm2S: number;
    readonly utc: string | null;
  }[];
  /** Fluence above 1 MeV by L bin. */
  readonly byL: readonly { readonly lFrom: number; readonly lTo: number; readonly above1MeVPerCm2: number }[];
  /** Share of the fluence above 1 MeV by evidence. */
  readonly byEvidence: Readonly<Record<EvidenceRegion, number>>;
}

export function summarise(
  artefact: FluenceArtefact,
  environment: EnvironmentChoice,
  rotation: RotationModel,
  passes: readonly (readonly PathSample[])[],
  compared: readonly {
    readonly fieldModelId: string;
    readonly electron: Float64Array;
    readonly proton: Float64Array;
  }[],
  options: { readonly thresholdsMeV?: Thresholds; readonly sampling?: FluenceSampling } = {},
): ExposureSummary {
  const thresholds: Record<Species, readonly number[]> = {
    electron: options.thresholdsMeV?.electron ?? DEFAULT_THRESHOLDS_MEV,
    proton: options.thresholdsMeV?.proton ?? DEFAULT_THRESHOLDS_MEV,
  };
  const { draws, seed } = options.sampling ?? DEFAULT_SAMPLING;
  const samples = passes.flat();
  const nominal = artefact.variants[artefact.nominalVariant];
  const integrals = (species: Species, edges: Float64Array) =>
    thresholds[species].map((threshold) => integralFluence(species, edges, threshold));
  const fluences = (species: Species, variant: number) => {
    const edges = variantEdges(artefact, variant, species);
    return integrals(species, edges);
  };
  const byPhase = artefact.variants.map((variant, index) => ({
    fieldModelId: variant.fieldModelId,
    offsetDeg: variant.offsetDeg,
    primary: variant.primary,
    refined: variant.weight === 0,
    electronPerCm2: fluences('electron', index),
    protonPerCm2: fluences('proton', index),
  }));
  const above1 = artefact.variants
    .map((variant, index) => ({
      variant,
      value: integralFluence('electron', variantEdges(artefact, index, 'electron'), 1),
    }))
    .filter(({ variant }) => variant.primary);
  const drawn = above1.filter(({ variant }) => variant.weight > 0).map(({ value }) => value);
  drawn.sort((a, b) => a - b);
  const worst = above1.reduce((best, entry) => (entry.value > best.value ? entry : best));
  const shown = thinned(samples, HISTORY_POINTS);
  return {
    environment,
    beltModelId: artefact.beltModelId,
    phaseSigmaDeg: artefact.groups.length === 0 ? 0 : phaseSigmaDeg(rotation, artefact.groups[0].startTdbS),
    thresholdsMeV: thresholds.electron,
    thresholdsBySpeciesMeV: thresholds,
    percentiles: fluencePercentiles(artefact, thresholds, draws, seed),
    fieldComparison: [
      {
        fieldModelId: nominal.fieldModelId,
        electronPerCm2: fluences('electron', artefact.nominalVariant),
        protonPerCm2: fluences('proton', artefact.nominalVariant),
      },
      ...compared
        .filter(({ fieldModelId }) => fieldModelId !== nominal.fieldModelId)
        .map(({ fieldModelId, electron, proton }) => ({
          fieldModelId,
          electronPerCm2: integrals('electron', electron),
          protonPerCm2: integrals('proton', proton),
        })),
    ],
    passCount: passes.length,
    nominal: { fieldModelId: nominal.fieldModelId, offsetDeg: nominal.offsetDeg },
    species: {
      electron: speciesSummary(artefact, 'electron', samples, thresholds.electron),
      proton: speciesSummary(artefact, 'proton', samples, thresholds.proton),
    },
    byPhase,
    phaseBand: { p05PerCm2: quantile(drawn, 0.05), p50PerCm2: quantile(drawn, 0.5), p95PerCm2: quantile(drawn, 0.95) },
    worstPhase: { offsetDeg: worst.variant.offsetDeg, electronAbove1MeVPerCm2: worst.value },
    history: {
      utc: shown.map((sample) => formatUtc(sample.epochTdbS, 0)),
      epochTdbS: shown.map((sample) => sample.epochTdbS),
      lShell: shown.map((sample) => (Number.isFinite(sample.lShell) ? sample.lShell : null)),
      electronAbovePerCm2S: thresholds.electron.map((threshold) =>
        shown.map((sample) => integralFluence('electron', sample.electron, threshold)),
      ),
      protonAbovePerCm2S: thresholds.proton.map((threshold) =>
        shown.map((sample) => integralFluence('proton', sample.proton, threshold)),
      ),
    },
    hoursOf90Percent: hoursOfShare(samples, 0.9),
  };
}

function speciesSummary(
  artefact: FluenceArtefact,
  species: Species,
  samples: readonly PathSample[],
  thresholdsMeV: readonly number[],
): SpeciesSummary {
  const energies = edgesMeV(species);
  const edges = variantEdges(artefact, artefact.nominalVariant, species);
  return {
    energiesMeV: Array.from(energies),
    differentialPerCm2MeV: Array.from(edges),
    integralPerCm2: Array.from(energies, (energy) => integralFluence(species, edges, energy)),
    fluencePerCm2: thresholdsMeV.map((threshold) => integralFluence(species, edges, threshold)),
    peaks: thresholdsMeV.map((thresholdMeV) => {
      let fluxPerCm2S = 0;
      let utc: string | null = null;
      for (const sample of samples) {
        const flux = integralFluence(species, sample[species], thresholdMeV);
        if (flux > fluxPerCm2S) {
          fluxPerCm2S = flux;
          utc = formatUtc(sample.epochTdbS, 0);
        }
      }
      return { thresholdMeV, fluxPerCm2S, utc };
    }),
    ...byLAndEvidence(artefact, species),
  };
}

function byLAndEvidence(artefact: FluenceArtefact, species: Species): Pick<SpeciesSummary, 'byL' | 'byEvidence'> {
  const energies = edgesMeV(species);
  const nEdges = energies.length;
  const nBins = artefact.lEdges.length - 1;
  const row = new Float64Array(nEdges);
  const bins = new Float64Array(nEdges - 1);
  const byEvidence: Record<EvidenceRegion, number> = {
    anchored: 0,
    sampled: 0,
    sampledQualitative: 0,
    extrapolated: 0,
  };
  let total = 0;
  const byL = Array.from({ length: nBins }, (_, bin) => {
    row.fill(0);
    for (let group = 0; group < artefact.groups.length; group++) {
      const at = ((artefact.nominalVariant * artefact.groups.length + group) * nBins + bin) * nEdges;
      for (let k = 0; k < nEdges; k++) row[k] += artefact[species][at + k];
    }
    binIntegralsInto(energies, row, bins);
    let above1 = 0;
    for (let k = 0; k < bins.length; k++) {
      if (Math.sqrt(energies[k] * energies[k + 1]) < 1) continue;
      above1 += bins[k];
      byEvidence[artefact.regions[species][bin * bins.length + k]] += bins[k];
    }
    total += above1;
    return { lFrom: artefact.lEdges[bin], lTo: artefact.lEdges[bin + 1], above1MeVPerCm2: above1 };
  });
  for (const region of EVIDENCE_REGIONS) byEvidence[region] = total > 0 ? byEvidence[region] / total : 0;
  return { byL, byEvidence };
}

/** Shortest total time whose samples bring a share of the electron fluence above 1 MeV, h. */
function hoursOfShare(samples: readonly PathSample[], share: number): number {
  const parts = samples
    .map((sample) => ({ flux: integralFluence('electron', sample.electron, 1), weightS: sample.weightS }))
    .sort((a, b) => b.flux - a.flux);
  const total = parts.reduce((sum, part) => sum + part.flux * part.weightS, 0);
  let reached = 0;
  let seconds = 0;
  for (const part of parts) {
    if (!(total > 0) || reached >= share * total) break;
    reached += part.flux * part.weightS;
    seconds += part.weightS;
  }
  return seconds / 3600;
}

/** Quantile of an ascending list, linear between the order statistics. */
function quantile(ascending: readonly number[], p: number): number {
  const at = p * (ascending.length - 1);
  const low = Math.floor(at);
  const high = Math.min(low + 1, ascending.length - 1);
  return ascending[low] + (at - low) * (ascending[high] - ascending[low]);
}
