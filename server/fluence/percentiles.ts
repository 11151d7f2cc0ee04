import { KP_MEASURE } from '../flux/index.ts';
import { randomStream } from '../numeric/random.ts';
import { edgesMeV, type Species } from '../numeric/spectrumGrid.ts';
import { integralFluence } from './spectra.ts';
import type { ExposureVariant, FluenceArtefact } from './types.ts';

/** 1 σ of the time variation of a single pass, decades. */
export const TIME_SIGMA_DEX = 0.3;
const SPECIES: readonly Species[] = ['electron', 'proton'];
/** Streams of the draws, kept apart from those of doses. */
const SHARD_FLUENCE = 21;

export interface FluenceSampling {
  readonly draws: number;
  readonly seed: number;
}

export interface FluenceBand {
  readonly p05PerCm2: number;
  readonly p50PerCm2: number;
  readonly p95PerCm2: number;
}

/** FluenceBand of the integral fluences, and how often the draws pass the Kennel-Petschek level. */
export interface FluencePercentiles {
  readonly draws: number;
  readonly seed: number;
  /** One per threshold. */
  readonly electron: readonly FluenceBand[];
  readonly proton: readonly FluenceBand[];
  /** Share of the draws in which some L bin that is met lies above the scaled Kennel-Petschek level. */
  readonly aboveKennelPetschekShare: number;
  /** By which measure. */
  readonly kennelPetschekMeasure: string;
}

/**
 * Draws the fluences of one trajectory.
 *
 * Δlog₁₀ j = g σ₀ + i √(σ(L)² − σ₀²) (inside the anchor; o outside) + t σ_E(E) + 0.3 s, standard normal, per species;
 * s per group of passes within 30 days. The field model is drawn at equal odds and the rotation phase by its weight,
 * together with the belts and the same for both species. Each draw has its own stream, so the numbers depend on
 * the seed alone.
 *
 * @param thresholdsMeV - per species, MeV
 * @returns percentiles, cm⁻², linear between order statistics (definition 7 of Hyndman & Fan 1996)
 */
export function fluencePercentiles(
  artefact: FluenceArtefact,
  thresholdsMeV: Readonly<Record<Species, readonly number[]>>,
  draws: number,
  seed: number,
): FluencePercentiles {
  const groups = artefact.groups.length;
  const bins = artefact.lEdges.length - 1;
  const fields = fieldDistributions(artefact.variants);
  const met = { electron: rowsMet(artefact, 'electron'), proton: rowsMet(artefact, 'proton') };
  const drawn = {
    electron: thresholdsMeV.electron.map(() => new Float64Array(draws)),
    proton: thresholdsMeV.proton.map(() => new Float64Array(draws)),
  };
  const radial = {
    electron: radialSpread(artefact, 'electron'),
    proton: radialSpread(artefact, 'proton'),
  };
  const spectra = {
    electron: new Float64Array(edgesMeV('electron').length),
    proton: new Float64Array(edgesMeV('proton').length),
  };
  const ratio = artefact.kennelPetschekRatio ?? new Float64Array(bins);
  const binFactor = new Float64Array(bins);
  let above = 0;
  for (let draw = 0; draw < draws; draw++) {
    const stream = randomStream(seed, SHARD_FLUENCE, draw);
    const uniformField = stream.uniform();
    const uniformPhase = stream.uniform();
    const variant = pick(fields[Math.floor(uniformField * fields.length)], uniformPhase);
    let exceeds = false;
    for (const species of SPECIES) {
      const g = stream.normal();
      const inside = stream.normal();
      const outside = stream.normal();
      const t = stream.normal();
      const shared = g * artefact.spread[species].sharedSigmaDex;
      for (let bin = 0; bin < bins; bin++) {
        const factor = artefact.spread[species].side[bin] === 'outside' ? outside : inside;
        binFactor[bin] = 10 ** (shared + factor * radial[species][bin]);
      }
      const out = spectra[species];
      const data = artefact[species];
      const edges = out.length;
      out.fill(0);
      for (let group = 0; group < groups; group++) {
        const s = stream.normal();
        const state = 10 ** (TIME_SIGMA_DEX * s);
        for (let bin = 0; bin < bins; bin++) {
          const row = (variant * groups + group) * bins + bin;
          if (met[species][row] === 0) continue;
          const factor = state * binFactor[bin];
          if (species === 'electron' && factor * ratio[bin] > 1) exceeds = true;
          const at = row * edges;
          for (let k = 0; k < edges; k++) out[k] += factor * data[at + k];
        }
      }
      const spread = artefact.energySigmaDex[species];
      for (let k = 0; k < edges; k++) if (spread[k] !== 0) out[k] *= 10 ** (t * spread[k]);
      for (let k = 0; k < thresholdsMeV[species].length; k++) {
        drawn[species][k][draw] = integralFluence(species, out, thresholdsMeV[species][k]);
      }
    }
    if (exceeds) above += 1;
  }
  return {
    draws,
    seed,
    electron: drawn.electron.map(percentilesOf),
    proton: drawn.proton.map(percentilesOf),
    aboveKennelPetschekShare: above / draws,
    kennelPetschekMeasure: KP_MEASURE,
  };
}

/** √(σ(L)² − σ₀²) per L bin; nil at the anchor. */
function radialSpread(artefact: FluenceArtefact, species: Species): Float64Array {
  const { sharedSigmaDex, sigmaDex } = artefact.spread[species];
  return sigmaDex.map((sigma) => Math.sqrt(Math.max(0, sigma ** 2 - sharedSigmaDex ** 2)));
}

/** 1 for each (variant, group, L bin) with particles. */
function rowsMet(artefact: FluenceArtefact, species: Species): Uint8Array {
  const edges = edgesMeV(species).length;
  const met = new Uint8Array(artefact[species].length / edges);
  for (let row = 0; row < met.length; row++) {
    for (let k = 0; k < edges && met[row] === 0; k++) if (artefact[species][row * edges + k] > 0) met[row] = 1;
  }
  return met;
}

/** Variants of one field model with their cumulative weights, ending at 1. */
interface FieldDistribution {
  readonly variants: readonly number[];
  readonly cumulative: readonly number[];
}

function fieldDistributions(variants: readonly ExposureVariant[]): FieldDistribution[] {
  const ids = [...new Set(variants.filter(({ weight }) => weight > 0).map(({ fieldModelId }) => fieldModelId))];
  return ids.map((id) => {
    const own = variants.flatMap(({ fieldModelId, weight }, i) => (fieldModelId === id && weight > 0 ? [i] : []));
    const total = own.reduce((sum, i) => sum + variants[i].weight, 0);
    let sum = 0;
    const cumulative = own.map((i) => {
      sum += variants[i].weight / total;
      return sum;
    });
    return { variants: own, cumulative };
  });
}

function pick({ variants, cumulative }: FieldDistribution, uniform: number): number {
  const at = cumulative.findIndex((sum) => uniform < sum);
  return variants[at < 0 ? variants.length - 1 : at];
}

function percentilesOf(values: Float64Array): FluenceBand {
  const ascending = values.slice().sort();
  const at = (share: number) => {
    const position = share * (ascending.length - 1);
    const low = Math.floor(position);
    const high = Math.min(low + 1, ascending.length - 1);
    return ascending[low] + (position - low) * (ascending[high] - ascending[low]);
  };
  return { p05PerCm2: at(0.05), p50PerCm2: at(0.5), p95PerCm2: at(0.95) };
}
