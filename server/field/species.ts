import type { FieldModel } from './types.ts';

/** A particle kind as the equations of motion need it. */
export type SpeciesId = 'electron' | 'proton';

/** Rest energies, MeV, and sign of the charge. @source CODATA 2018 recommended values */
export const SPECIES: Readonly<Record<SpeciesId, { readonly restEnergyMeV: number; readonly chargeSign: 1 | -1 }>> = {
  electron: { restEnergyMeV: 0.51099895, chargeSign: -1 },
  proton: { restEnergyMeV: 938.27208816, chargeSign: 1 },
};

/** Speed of light, km/s, exact. */
export const LIGHT_SPEED_KM_PER_S = 299792.458;
/** mc/e per MeV of rest energy, nT km: 10⁶ V / c. */
const RIGIDITY_NT_KM_PER_MEV = 1e12 / 299792458;

/** p/(mc) = sqrt(γ² − 1) of a kinetic energy. */
export function momentumOverMc(species: SpeciesId, energyMeV: number): number {
  const kinetic = energyMeV / SPECIES[species].restEnergyMeV;
  return Math.sqrt(kinetic * (kinetic + 2));
}

/** Kinetic energy, MeV, of p/(mc). */
export function kineticEnergyMeV(species: SpeciesId, momentum: number): number {
  return (SPECIES[species].restEnergyMeV * momentum * momentum) / (1 + Math.sqrt(1 + momentum * momentum));
}

/** mc/|q| in nT × reference radii: gyroradius of p⊥ = mc in 1 nT. */
export function rigidityNtRadii(species: SpeciesId, model: FieldModel): number {
  return (SPECIES[species].restEnergyMeV * RIGIDITY_NT_KM_PER_MEV) / model.referenceRadiusKm;
}
