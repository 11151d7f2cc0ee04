/** Dose = ⟨fluence⟩ · ⟨response⟩. */
import type { ShieldResponse } from '../shielding/types.ts';
import type { FluenceSpectra, FoldedDose } from './types.ts';

/** Σ a b over the bins. */
export function dot(a: Float64Array, b: Float64Array): number {
  if (a.length !== b.length) throw new TypeError(`spectra of ${a.length} and ${b.length} bins cannot be folded`);
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i] * b[i];
  return sum;
}

/**
 * Dose behind a shield, by what deposited it, with the statistical error of the response.
 *
 * The response is an average over each bin, the fluence an integral, so the fold is exact for a response that is flat
 * inside a bin; bins are a twenty-fourth of a decade. Statistical errors of bins are independent and add in quadrature.
 *
 * @param spectra - omnidirectional fluence per bin, cm⁻² (a flux per bin gives a dose rate)
 * @returns Gy of the response's target material (Gy/s for a flux)
 */
export function foldDose(spectra: FluenceSpectra, response: ShieldResponse): FoldedDose {
  const fluence = spectra.electronPerCm2;
  const { doseGyCm2, doseSigmaGyCm2, bremsstrahlungGyCm2, bremsstrahlungSigmaGyCm2 } = response.electron;
  const electronGy = dot(fluence, doseGyCm2);
  const bremsstrahlungGy = dot(fluence, bremsstrahlungGyCm2);
  const protonGy = dot(spectra.protonPerCm2, response.proton.doseGyCm2);
  let variance = 0;
  for (let i = 0; i < fluence.length; i++) {
    variance += (fluence[i] * doseSigmaGyCm2[i]) ** 2 + (fluence[i] * bremsstrahlungSigmaGyCm2[i]) ** 2;
  }
  return {
    electronGy,
    bremsstrahlungGy,
    protonGy,
    totalGy: electronGy + bremsstrahlungGy + protonGy,
    sigmaGy: Math.sqrt(variance),
  };
}

/** Electrons per cm² that come out behind the shield (one-way current), for a fluence or a flux per bin. */
export function foldTransmittedElectrons(spectra: FluenceSpectra, response: ShieldResponse): number {
  return dot(spectra.electronPerCm2, response.electron.transmitted);
}
