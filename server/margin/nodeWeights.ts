/** A response reduced to weights on a sparser set of energies, for spectra that are smooth against a reference. */
import { binIntegralsInto, edgesMeV, type Species } from '../numeric/spectrumGrid.ts';

/** Every second edge of a grid is a node: 46 for electrons, 61 for protons, a twelfth of a decade apart. */
const NODE_STRIDE = 2;

export function nodeEdges(species: Species): readonly number[] {
  return ENERGY_NODES[species];
}

export const ENERGY_NODES: Readonly<Record<Species, readonly number[]>> = {
  electron: everySecond(edgesMeV('electron').length),
  proton: everySecond(edgesMeV('proton').length),
};

interface SpeciesWeights {
  /** Shape (nodes,): dose per unit differential fluence at the node, Gy cm² MeV. */
  readonly values: Float64Array;
  /** First node whose weight is not zero. */
  readonly from: number;
}

export type NodeWeights = Readonly<Record<Species, SpeciesWeights>>;

/** A positive spectrum that draws are compared with, and the interpolation from nodes to bins that it fixes. */
export interface ReferenceSpectrum {
  readonly species: Species;
  /** Shape (bins,), bin integrals of the reference. */
  readonly bins: Float64Array;
  /** For each bin up to four nodes and their Lagrange weights in ln E, each divided by the reference at the node. */
  readonly stencils: readonly { readonly nodes: readonly number[]; readonly weights: readonly number[] }[];
}

/**
 * Fixes the interpolation for spectra near a reference.
 *
 * The ratio of a drawn spectrum to the reference is smooth in ln E; cubic Lagrange interpolation on nodes a twelfth of
 * a decade apart follows a ratio that changes by e^0.5 from node to node to 0.2 %. Nodes where the reference is
 * zero are left out, and bins beyond the last usable node take its ratio.
 *
 * @param differential - shape (edges,), MeV⁻¹ times any unit, ≥ 0
 */
export function referenceSpectrum(species: Species, differential: Float64Array): ReferenceSpectrum {
  const edges = edgesMeV(species);
  const bins = binIntegralsInto(edges, differential, new Float64Array(edges.length - 1));
  const valid = ENERGY_NODES[species]
    .map((edge, node) => ({ edge, node }))
    .filter(({ edge }) => differential[edge] > 0);
  const x = valid.map(({ edge }) => Math.log(edges[edge]));
  const stencils = Array.from(bins, (_, bin) => {
    const centre = centroid(edges, differential, bin);
    if (valid.length === 0) return { nodes: [], weights: [] };
    const clamped = Math.min(Math.max(centre, x[0]), x[x.length - 1]);
    let low = 0;
    while (low < x.length - 2 && x[low + 1] <= clamped) low++;
    const start = Math.max(0, Math.min(low - 1, x.length - 4));
    const stop = Math.min(x.length, start + 4);
    const nodes: number[] = [];
    const weights: number[] = [];
    for (let i = start; i < stop; i++) {
      let weight = 1;
      for (let j = start; j < stop; j++) if (j !== i) weight *= (clamped - x[j]) / (x[i] - x[j]);
      nodes.push(valid[i].node);
      weights.push(weight / differential[valid[i].edge]);
    }
    return { nodes, weights };
  });
  return { species, bins, stencils };
}

/** Weights on the nodes that give the same fold as `response` per bin, for spectra near the reference. */
export function nodeWeights(reference: ReferenceSpectrum, response: ArrayLike<number>): SpeciesWeights {
  const values = new Float64Array(ENERGY_NODES[reference.species].length);
  for (let bin = 0; bin < reference.bins.length; bin++) {
    const amount = response[bin] * reference.bins[bin];
    if (amount === 0) continue;
    const { nodes, weights } = reference.stencils[bin];
    for (let k = 0; k < nodes.length; k++) values[nodes[k]] += amount * weights[k];
  }
  const first = values.findIndex((value) => value !== 0);
  return { values, from: first < 0 ? values.length : first };
}

/** Mean ln E of the particles in a bin, for the power law between its edges. */
function centroid(edges: Float64Array, differential: Float64Array, bin: number): number {
  const width = Math.log(edges[bin + 1] / edges[bin]);
  const low = differential[bin];
  const high = differential[bin + 1];
  const growth = low > 0 && high > 0 ? Math.log(high / low) + width : 0;
  // Mean of u over [0, w] with weight e^{gu/w}: w (1/(1 − e^{−g}) − 1/g), whose series is w (1/2 + g/12).
  const share = Math.abs(growth) < 1e-3 ? 0.5 + growth / 12 : -1 / Math.expm1(-growth) - 1 / growth;
  return Math.log(edges[bin]) + share * width;
}

function everySecond(edgeCount: number): number[] {
  return Array.from({ length: Math.floor((edgeCount - 1) / NODE_STRIDE) + 1 }, (_, i) => i * NODE_STRIDE);
}
