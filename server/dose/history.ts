/** What the passage looks like behind a shield as time goes: peak dose rate, and screening for internal charging. */
import { readReferenceJson } from '../constants/reference.ts';
import type { FluxHistory } from '../fluence/types.ts';
import { binIntegralsInto, ELECTRON_EDGES_MEV, PROTON_EDGES_MEV } from '../numeric/spectrumGrid.ts';
import type { ShieldResponse } from '../shielding/types.ts';
import { ELECTRON_BINS, PROTON_BINS } from './spectra.ts';

/** A flux history integrated over the energy bins once, so that folding it with a response is a plain product. */
export interface BinnedHistory {
  readonly epochTdbS: Float64Array;
  /** Index sample · 90 + bin, cm⁻² s⁻¹ per bin. */
  readonly electronPerCm2S: Float64Array;
  /** Index sample · 120 + bin, cm⁻² s⁻¹ per bin. */
  readonly protonPerCm2S: Float64Array;
}

export function binHistory(history: FluxHistory): BinnedHistory {
  const samples = history.epochTdbS.length;
  const electronPerCm2S = new Float64Array(samples * ELECTRON_BINS);
  const protonPerCm2S = new Float64Array(samples * PROTON_BINS);
  for (let i = 0; i < samples; i++) {
    binIntegralsInto(
      ELECTRON_EDGES_MEV,
      history.electron.subarray(i * (ELECTRON_BINS + 1), (i + 1) * (ELECTRON_BINS + 1)),
      electronPerCm2S.subarray(i * ELECTRON_BINS, (i + 1) * ELECTRON_BINS),
    );
    binIntegralsInto(
      PROTON_EDGES_MEV,
      history.proton.subarray(i * (PROTON_BINS + 1), (i + 1) * (PROTON_BINS + 1)),
      protonPerCm2S.subarray(i * PROTON_BINS, (i + 1) * PROTON_BINS),
    );
  }
  return { epochTdbS: history.epochTdbS, electronPerCm2S, protonPerCm2S };
}

export interface PeakRate {
  readonly doseRateGyPerS: number;
  readonly epochTdbS: number;
}

/** Largest dose rate over the samples; the flux is linear between them, so no larger one lies in between. */
export function peakDoseRate(history: BinnedHistory, response: ShieldResponse): PeakRate {
  const electron = new Float64Array(ELECTRON_BINS);
  for (let bin = 0; bin < ELECTRON_BINS; bin++) {
    electron[bin] = response.electron.doseGyCm2[bin] + response.electron.bremsstrahlungGyCm2[bin];
  }
  const proton = response.proton.doseGyCm2;
  const fromElectron = firstBin(electron);
  const fromProton = firstBin(proton);
  let best = -1;
  let at = 0;
  for (let i = 0; i < history.epochTdbS.length; i++) {
    const rate =
      rowDot(history.electronPerCm2S, i, electron, fromElectron) + rowDot(history.protonPerCm2S, i, proton, fromProton);
    if (rate > best) {
      best = rate;
      at = i;
    }
  }
  return { doseRateGyPerS: Math.max(best, 0), epochTdbS: history.epochTdbS[at] };
}

/** Figures that transmitted electrons are compared with; db/reference/charging/SOURCE.md says where they come from. */
export interface ChargingLimits {
  readonly currentPaPerCm2: number;
  readonly coldCurrentPaPerCm2: number;
  readonly windowS: number;
  readonly windowFluencePerCm2: number;
}

export const CHARGING_LIMITS: ChargingLimits = readReferenceJson<ChargingLimits>('charging', 'limits.json');

/** Elementary charge in pC (exact since the 2019 SI). */
export const ELEMENTARY_CHARGE_PC = 1.602176634e-7;

export interface TransmittedPeak {
  /** Largest one-way electron current behind the shield, pA/cm². */
  readonly currentPaPerCm2: number;
  readonly epochTdbS: number;
  /** Largest fluence of transmitted electrons in any window of `windowS`, cm⁻². */
  readonly windowFluencePerCm2: number;
}

/**
 * Peak current and largest running fluence of the electrons that come through a shield.
 *
 * The flux is linear between samples and zero outside them. Windows are tried that start or end at a sample; the
 * largest of all windows exceeds the largest of these by less than one sample spacing holds.
 */
export function transmittedPeak(history: BinnedHistory, response: ShieldResponse, windowS: number): TransmittedPeak {
  const { epochTdbS } = history;
  const n = epochTdbS.length;
  const flux = new Float64Array(n);
  const cumulative = new Float64Array(n);
  const { transmitted } = response.electron;
  const from = firstBin(transmitted);
  let peak = 0;
  for (let i = 0; i < n; i++) {
    flux[i] = rowDot(history.electronPerCm2S, i, transmitted, from);
    if (flux[i] > flux[peak]) peak = i;
    if (i > 0) cumulative[i] = cumulative[i - 1] + 0.5 * (flux[i] + flux[i - 1]) * (epochTdbS[i] - epochTdbS[i - 1]);
  }
  const upTo = (epoch: number, hint: number): number => {
    if (epoch <= epochTdbS[0]) return 0;
    if (epoch >= epochTdbS[n - 1]) return cumulative[n - 1];
    let k = hint;
    while (epochTdbS[k + 1] < epoch) k++;
    const step = epochTdbS[k + 1] - epochTdbS[k];
    const part = epoch - epochTdbS[k];
    const here = step > 0 ? flux[k] + ((flux[k + 1] - flux[k]) * part) / step : flux[k];
    return cumulative[k] + 0.5 * (flux[k] + here) * part;
  };
  let largest = 0;
  let lead = 0;
  let trail = 0;
  for (let i = 0; i < n; i++) {
    while (lead < n - 2 && epochTdbS[lead + 1] < epochTdbS[i] + windowS) lead++;
    while (trail < n - 2 && epochTdbS[trail + 1] < epochTdbS[i] - windowS) trail++;
    const starting = upTo(epochTdbS[i] + windowS, lead) - cumulative[i];
    const ending = cumulative[i] - upTo(epochTdbS[i] - windowS, trail);
    largest = Math.max(largest, starting, ending);
  }
  return {
    currentPaPerCm2: flux[peak] * ELEMENTARY_CHARGE_PC,
    epochTdbS: epochTdbS[peak],
    windowFluencePerCm2: largest,
  };
}

/** Σ of one row of samples with weights, from the first bin that counts. */
function rowDot(rows: Float64Array, row: number, weights: Float64Array, from: number): number {
  const n = weights.length;
  const base = row * n;
  let a = 0;
  let b = 0;
  let i = from;
  for (; i + 1 < n; i += 2) {
    a += rows[base + i] * weights[i];
    b += rows[base + i + 1] * weights[i + 1];
  }
  if (i < n) a += rows[base + i] * weights[i];
  return a + b;
}

/** First bin of a response that is not zero: shields stop everything below it. */
function firstBin(weights: Float64Array): number {
  const found = weights.findIndex((value) => value !== 0);
  return found < 0 ? weights.length : found;
}
