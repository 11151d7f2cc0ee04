import type { BeltModel, EvidenceRegion } from '../flux/types.ts';
import { edgesMeV, type Species } from '../numeric/spectrumGrid.ts';
import type { LBinSpread } from './types.ts';

/** Bins narrower than this in ln L resolve every profile of the belts. */
const TARGET_WIDTH = 0.055;

/** Edges of the L bins: every break of the model, and between two of them equal steps in ln L. */
export function lBinEdges(belts: BeltModel): Float64Array {
  const breaks = [belts.lMin, ...belts.lBreaks.filter((l) => l > belts.lMin && l < belts.lMax), belts.lMax];
  const edges: number[] = [];
  for (let i = 1; i < breaks.length; i++) {
    const count = Math.max(1, Math.round(Math.log(breaks[i] / breaks[i - 1]) / TARGET_WIDTH));
    for (let k = 0; k < count; k++) edges.push(breaks[i - 1] * (breaks[i] / breaks[i - 1]) ** (k / count));
  }
  edges.push(belts.lMax);
  return Float64Array.from(edges);
}

/** Index of the bin that holds an L, or −1. */
export function lBinOf(edges: Float64Array, lShell: number): number {
  const last = edges.length - 1;
  if (!(lShell >= edges[0] && lShell <= edges[last])) return -1;
  let low = 0;
  let high = last;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (edges[middle] <= lShell) low = middle;
    else high = middle;
  }
  return low;
}

export function binSpread(belts: BeltModel, species: Species, edges: Float64Array): LBinSpread {
  const bins = edges.length - 1;
  const sigmaDex = new Float64Array(bins);
  const side: ('anchor' | 'inside' | 'outside')[] = [];
  for (let i = 0; i < bins; i++) {
    const spread = belts.spread(species, Math.sqrt(edges[i] * edges[i + 1]));
    sigmaDex[i] = spread.sigmaDex;
    side.push(spread.side);
  }
  return { sharedSigmaDex: belts.sharedSigmaDex(species), sigmaDex, side };
}

export function binRegions(belts: BeltModel, species: Species, edges: Float64Array): EvidenceRegion[] {
  const energies = edgesMeV(species);
  const regions: EvidenceRegion[] = [];
  for (let i = 0; i < edges.length - 1; i++) {
    const lShell = Math.sqrt(edges[i] * edges[i + 1]);
    for (let k = 0; k < energies.length - 1; k++) {
      regions.push(belts.region(species, lShell, Math.sqrt(energies[k] * energies[k + 1])));
    }
  }
  return regions;
}

export function energySigma(belts: BeltModel, species: Species): Float64Array {
  return Float64Array.from(edgesMeV(species), (energyMeV) => belts.energySigmaDex(species, energyMeV));
}
