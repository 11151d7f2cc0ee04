import { binIntegralsInto, edgesMeV, type Species } from '../numeric/spectrumGrid.ts';
import type { FluenceArtefact } from './types.ts';

/** Differential fluence of one variant, all groups and L summed, cm⁻² MeV⁻¹ at the edges of the grid. */
export function variantEdges(artefact: FluenceArtefact, variant: number, species: Species): Float64Array {
  const nEdges = edgesMeV(species).length;
  const rows = artefact.groups.length * (artefact.lEdges.length - 1);
  const out = new Float64Array(nEdges);
  const data = artefact[species];
  for (let row = 0; row < rows; row++) {
    const at = (variant * rows + row) * nEdges;
    for (let k = 0; k < nEdges; k++) out[k] += data[at + k];
  }
  return out;
}

/** Integral of a spectrum given at the edges of its grid above a threshold, power laws within the bins. */
export function integralFluence(species: Species, differential: ArrayLike<number>, thresholdMeV: number): number {
  const edges = edgesMeV(species);
  const bin = new Float64Array(1);
  const pair = new Float64Array(2);
  const values = new Float64Array(2);
  let sum = 0;
  for (let k = edges.length - 2; k >= 0; k--) {
    if (edges[k + 1] <= thresholdMeV) break;
    const low = Math.max(edges[k], thresholdMeV);
    const fLow = differential[k];
    const fHigh = differential[k + 1];
    pair[0] = low;
    pair[1] = edges[k + 1];
    values[1] = fHigh;
    const share = Math.log(low / edges[k]) / Math.log(edges[k + 1] / edges[k]);
    values[0] = fLow > 0 && fHigh > 0 ? fLow * (fHigh / fLow) ** share : fLow + share * (fHigh - fLow);
    sum += binIntegralsInto(pair, values, bin)[0];
  }
  return sum;
}
