/** Mission fluence of one trajectory, with the band of the drawn belts at a few thresholds. */
import { SPECIES } from '../dose/index.ts';
import { EVIDENCE_REGIONS, type EvidenceRegion } from '../flux/types.ts';
import { binIntegralsInto, edgesMeV, type Species } from '../numeric/spectrumGrid.ts';
import type { RandomNumbers } from './beltDraws.ts';
import { makeCaseSampler, type SampledColumn } from './caseSampler.ts';
import { CURVE_DRAWS } from './depthRows.ts';
import { nodeWeights, referenceSpectrum } from './nodeWeights.ts';
import type { TrajectorySpectra } from './nominal.ts';
import { nominalEdgesOf } from './nominal.ts';
import { percentile } from './percentiles.ts';
import type { FluenceRow } from './result.ts';

/** Energies above which particles are counted: what penetrates thin walls, boxes and vaults. */
const THRESHOLDS_MEV: Readonly<Record<Species, readonly number[]>> = {
  electron: [0.1, 0.5, 1, 2, 5],
  proton: [1, 10, 30, 100],
};
/** Evidence is counted over the particles that reach electronics. */
const EVIDENCE_FROM_MEV = 1;

/** Two rows, electrons and protons, of one pass of a trajectory. */
export function fluenceRows(spectra: TrajectorySpectra, numbers: RandomNumbers): FluenceRow[] {
  const { trajectory } = spectra;
  const sampler = makeCaseSampler([{ trajectory, repetitions: 1 }], numbers);
  const references = {
    electron: referenceSpectrum('electron', spectra.referenceEdges.electron),
    proton: referenceSpectrum('proton', spectra.referenceEdges.proton),
  };
  return SPECIES.map((species): FluenceRow => {
    const edges = edgesMeV(species);
    const differential = nominalEdgesOf(trajectory, species);
    const integral = (of: Float64Array): number[] => {
      const bins = binIntegralsInto(edges, of, new Float64Array(edges.length - 1));
      const out = new Array<number>(edges.length).fill(0);
      for (let i = edges.length - 2; i >= 0; i--) out[i] = out[i + 1] + bins[i];
      return out;
    };
    const thresholds = THRESHOLDS_MEV[species];
    const none = new Float64Array((species === 'electron' ? edgesMeV('proton') : edgesMeV('electron')).length - 1);
    const columns = thresholds.map((threshold): SampledColumn => {
      const step = nodeWeights(references[species], shareAbove(edges, spectra.referenceEdges[species], threshold));
      const blank = nodeWeights(references[species === 'electron' ? 'proton' : 'electron'], none);
      return {
        weights: species === 'electron' ? { electron: step, proton: blank } : { electron: blank, proton: step },
        statisticalErrorRel: 0,
        errorDeviates: null,
        constantGy: 0,
      };
    });
    const { doses: counts } = sampler.sample(columns, Math.min(numbers.draws, CURVE_DRAWS));
    for (const values of counts) values.sort();
    return {
      trajectoryId: trajectory.trajectoryId,
      species,
      energiesMeV: Array.from(edges),
      differentialPerCm2MeV: Array.from(differential),
      integralPerCm2: integral(differential),
      bands: thresholds.map((thresholdMeV, i) => ({
        thresholdMeV,
        nominalPerCm2: countAbove(edges, differential, thresholdMeV),
        bandPerCm2: {
          p05: percentile(counts[i], 5),
          p50: percentile(counts[i], 50),
          p95: percentile(counts[i], 95),
        },
      })),
      byEvidence: byEvidence(spectra, species),
    };
  });
}

/** Share of each bin that lies above a threshold, for a spectrum with that shape. */
function shareAbove(edges: Float64Array, differential: Float64Array, threshold: number): Float64Array {
  const out = new Float64Array(edges.length - 1);
  const whole = binIntegralsInto(edges, differential, new Float64Array(out.length));
  for (let bin = 0; bin < out.length; bin++) {
    if (edges[bin] >= threshold) out[bin] = 1;
    else if (edges[bin + 1] > threshold && whole[bin] > 0) {
      out[bin] = partAbove(edges, differential, bin, threshold) / whole[bin];
    }
  }
  return out;
}

function countAbove(edges: Float64Array, differential: Float64Array, threshold: number): number {
  const whole = binIntegralsInto(edges, differential, new Float64Array(edges.length - 1));
  const shares = shareAbove(edges, differential, threshold);
  return whole.reduce((sum, value, bin) => sum + value * shares[bin], 0);
}

/** Integral from a threshold inside a bin to its upper edge, by the power law between its edges. */
function partAbove(edges: Float64Array, differential: Float64Array, bin: number, threshold: number): number {
  const [low, high] = [differential[bin], differential[bin + 1]];
  const fraction = Math.log(threshold / edges[bin]) / Math.log(edges[bin + 1] / edges[bin]);
  const at = low > 0 && high > 0 ? low * (high / low) ** fraction : low + (high - low) * fraction;
  return binIntegralsInto(Float64Array.of(threshold, edges[bin + 1]), [at, high], new Float64Array(1))[0];
}

function byEvidence(spectra: TrajectorySpectra, species: Species): Record<EvidenceRegion, number> {
  const edges = edgesMeV(species);
  const counts = EVIDENCE_REGIONS.map((region) => {
    const bins = spectra.onePassEvidence[region][species === 'electron' ? 'electronPerCm2' : 'protonPerCm2'];
    return bins.reduce((sum, value, bin) => sum + (edges[bin] >= EVIDENCE_FROM_MEV ? value : 0), 0);
  });
  const total = counts.reduce((sum, count) => sum + count, 0);
  return Object.fromEntries(EVIDENCE_REGIONS.map((region, i) => [region, total > 0 ? counts[i] / total : 0])) as Record<
    EvidenceRegion,
    number
  >;
}
