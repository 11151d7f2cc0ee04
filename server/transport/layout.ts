/** Columns of the electron and photon tables: one row an energy, all that a step needs side by side. */
export const STOPPING = 0;
export const STRAGGLING = 1;
/** All hard events, then the parts: elastic, Møller, bremsstrahlung, per g/cm². */
export const RATE_HARD = 2;
export const RATE_ELASTIC = 3;
export const RATE_MOLLER = 4;
export const RATE_BREMS = 5;
export const SOFT_1 = 6;
export const SOFT_2 = 7;
export const RANGE = 8;
export const ELECTRON_COLUMNS = 9;

/** Total, Compton, pair; the rest is photoelectric. */
export const PHOTON_COLUMNS = 3;
export const PHOTON_COMPTON = 1;
export const PHOTON_PAIR = 2;

/**
 * Hard deflections lie at shares of their number that crowd towards the largest: four stretches of 48 steps, each from
 * where the last one ends to an eighth of what it left. Backward scattering is one collision in thousands.
 */
export const STRETCH_STEPS = 48;
export const ELASTIC_QUANTILES = 4 * STRETCH_STEPS + 1;
/** Place in the quantiles of a share u of the collisions, in order of their angle. */
export function quantilePlace(u: number): number {
  if (u < 7 / 8) return u * (STRETCH_STEPS / (7 / 8));
  if (u < 63 / 64) return STRETCH_STEPS + (u - 7 / 8) * (STRETCH_STEPS / (7 / 64));
  if (u < 511 / 512) return 2 * STRETCH_STEPS + (u - 63 / 64) * (STRETCH_STEPS / (7 / 512));
  return 3 * STRETCH_STEPS + (u - 511 / 512) * (STRETCH_STEPS * 512);
}
/** Share of the collisions below a node of the quantiles: the inverse of `quantilePlace`. */
export function quantileShare(node: number): number {
  const stretch = Math.min(3, Math.floor(node / STRETCH_STEPS));
  const start = 1 - 8 ** -stretch;
  const end = stretch === 3 ? 1 : 1 - 8 ** -(stretch + 1);
  return start + ((node - stretch * STRETCH_STEPS) / STRETCH_STEPS) * (end - start);
}
export const BREMS_QUANTILES = 257;
