import { ELECTRON_EDGES_MEV, PROTON_EDGES_MEV } from '../numeric/spectrumGrid.ts';
import type { PathSample } from './followPass.ts';
import type { FluxHistory } from './types.ts';

export const MAX_HISTORY_SAMPLES = 2000;
/** A pass begins and ends where the belts do: a zero sample this long before and after closes it. */
const CLOSING_S = 1;

/** Samples of all passes, thinned so that the highest flux of each stretch stays, with zeros closing every pass. */
export function fluxHistory(passes: readonly (readonly PathSample[])[]): FluxHistory {
  const kept: (PathSample | number)[] = [];
  const budget = Math.max(3, Math.floor(MAX_HISTORY_SAMPLES / Math.max(1, passes.length)) - 2);
  for (const samples of passes) {
    if (samples.length === 0) continue;
    kept.push(samples[0].epochTdbS - CLOSING_S);
    kept.push(...thinned(samples, budget));
    kept.push(samples[samples.length - 1].epochTdbS + CLOSING_S);
  }
  const nE = ELECTRON_EDGES_MEV.length;
  const nP = PROTON_EDGES_MEV.length;
  const epochTdbS = new Float64Array(kept.length);
  const electron = new Float32Array(kept.length * nE);
  const proton = new Float32Array(kept.length * nP);
  kept.forEach((entry, i) => {
    if (typeof entry === 'number') {
      epochTdbS[i] = entry;
      return;
    }
    epochTdbS[i] = entry.epochTdbS;
    electron.set(entry.electron, i * nE);
    proton.set(entry.proton, i * nP);
  });
  return { epochTdbS, electron, proton };
}

/** At most `budget` samples: one of each equal stretch of samples, the one of highest flux above 1 MeV. */
export function thinned(samples: readonly PathSample[], budget: number): PathSample[] {
  if (samples.length <= budget) return [...samples];
  const out: PathSample[] = [];
  for (let k = 0; k < budget; k++) {
    const from = Math.floor((k * samples.length) / budget);
    const to = Math.floor(((k + 1) * samples.length) / budget);
    let best = samples[from];
    for (let i = from + 1; i < to; i++) if (samples[i].measures[2] > best.measures[2]) best = samples[i];
    out.push(best);
  }
  return out;
}
