/** Matter: materials, stopping powers, ranges, photon and elastic cross-sections, displacement damage. */
export {
  ALPHA,
  AVOGADRO,
  moliereScreening,
  mottCoefficientsInto,
  mottRatio,
  rutherfordStrength,
} from './elastic.ts';
export {
  ELECTRON_REST_MEV,
  electronCollisionStopping,
  electronCsdaRange,
  electronRadiativeStopping,
  mollerLoss,
  radiationYield,
  restrictedCollisionStopping,
  TWO_PI_NA_RE2_MC2,
} from './electronStopping.ts';
export { type MixtureInput, material, materials, mixture, zOverA } from './materials.ts';
export { NEUTRON_1MEV_NIEL_MEV_CM2_PER_G, nielSilicon } from './niel.ts';
export { photonAttenuation, photonCrossSections, photonEnergyAbsorption } from './photons.ts';
export { ProtonRange, protonStopping } from './protonStopping.ts';
export type { Constituent, Material, SternheimerFit } from './types.ts';
