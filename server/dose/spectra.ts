/** From fluence artefacts and edge values to the bin-integrated spectra that responses are folded with. */
import type { FluenceArtefact } from '../fluence/types.ts';
import { EVIDENCE_REGIONS, type EvidenceRegion } from '../flux/types.ts';
import {
  binIntegralsInto,
  ELECTRON_EDGES_MEV,
  edgesMeV,
  PROTON_EDGES_MEV,
  type Species,
} from '../numeric/spectrumGrid.ts';
import type { FluenceSpectra } from './types.ts';

export const ELECTRON_BINS = ELECTRON_EDGES_MEV.length - 1;
export const PROTON_BINS = PROTON_EDGES_MEV.length - 1;
export const SPECIES: readonly Species[] = ['electron', 'proton'];

/**
 * Differential fluence of one variant, summed over groups of passes and L.
 *
 * @param out - shape (91,) or (121,), cm⁻² MeV⁻¹; `weight` times the fluence is added to what it holds
 */
export function addVariantInto(
  artefact: FluenceArtefact,
  variant: number,
  species: Species,
  weight: number,
  out: Float64Array,
): Float64Array {
  const rows = artefact.groups.length * (artefact.lEdges.length - 1);
  const edges = out.length;
  const data = artefact[species];
  for (let row = 0; row < rows; row++) {
    const base = (variant * rows + row) * edges;
    for (let edge = 0; edge < edges; edge++) out[edge] += weight * data[base + edge];
  }
  return out;
}

/** Bin-integrated spectra of differential fluences (or fluxes) at the edges of the two grids. */
export function spectraFromEdges(electronPerMeV: ArrayLike<number>, protonPerMeV: ArrayLike<number>): FluenceSpectra {
  return {
    electronPerCm2: binIntegralsInto(ELECTRON_EDGES_MEV, electronPerMeV, new Float64Array(ELECTRON_BINS)),
    protonPerCm2: binIntegralsInto(PROTON_EDGES_MEV, protonPerMeV, new Float64Array(PROTON_BINS)),
  };
}

/** Weights of the variants that make the nominal fluence of a trajectory: sums to 1. */
export type VariantWeights = readonly { readonly variant: number; readonly weight: number }[];

export function nominalEdges(artefact: FluenceArtefact, weights: VariantWeights, species: Species): Float64Array {
  const out = new Float64Array(edgesMeV(species).length);
  for (const { variant, weight } of weights) addVariantInto(artefact, variant, species, weight, out);
  return out;
}

/**
 * The nominal spectra split by how far the belts rest on measurement there.
 *
 * Each (L, energy) bin belongs to one region; the parts sum to the whole up to the interpolation inside an energy bin.
 */
export function spectraByEvidence(
  artefact: FluenceArtefact,
  weights: VariantWeights,
): Record<EvidenceRegion, FluenceSpectra> {
  const out = Object.fromEntries(
    EVIDENCE_REGIONS.map((region) => [
      region,
      { electronPerCm2: new Float64Array(ELECTRON_BINS), protonPerCm2: new Float64Array(PROTON_BINS) },
    ]),
  ) as Record<EvidenceRegion, FluenceSpectra>;
  const nL = artefact.lEdges.length - 1;
  const nGroups = artefact.groups.length;
  for (const species of SPECIES) {
    const edges = edgesMeV(species);
    const n = edges.length;
    const differential = new Float64Array(n);
    const bins = new Float64Array(n - 1);
    const data = artefact[species];
    for (let l = 0; l < nL; l++) {
      differential.fill(0);
      for (const { variant, weight } of weights) {
        for (let group = 0; group < nGroups; group++) {
          const base = ((variant * nGroups + group) * nL + l) * n;
          for (let edge = 0; edge < n; edge++) differential[edge] += weight * data[base + edge];
        }
      }
      binIntegralsInto(edges, differential, bins);
      for (let bin = 0; bin < bins.length; bin++) {
        const part = out[artefact.regions[species][l * bins.length + bin]];
        const target = species === 'electron' ? part.electronPerCm2 : part.protonPerCm2;
        target[bin] += bins[bin];
      }
    }
  }
  return out;
}
