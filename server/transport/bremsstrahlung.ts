import { ALPHA, ELECTRON_REST_MEV } from '../matter/index.ts';

/**
 * Bremsstrahlung spectrum k dσ/dk of one nucleus over Z² r₀² α, dimensionless: the Born formula 3BN of Koch & Motz with
 * Elwert's Coulomb factor. Only the shape is used; the strength is set by the radiative stopping power.
 *
 * @param energyMeV - kinetic energy of the electron
 * @param photonMeV - energy of the photon, 0 < k < T
 * @source Koch & Motz (1959), Rev. Mod. Phys. 31, 920, formula 3BN; Elwert (1939), Ann. Phys. 426, 178
 */
export function bremsstrahlungShape(z: number, energyMeV: number, photonMeV: number): number {
  const e0 = energyMeV / ELECTRON_REST_MEV + 1;
  const k = photonMeV / ELECTRON_REST_MEV;
  const e = e0 - k;
  const p02 = e0 * e0 - 1;
  const p2 = e * e - 1;
  if (!(p2 > 1e-12)) return 0;
  const p0 = Math.sqrt(p02);
  const p = Math.sqrt(p2);
  const eps0 = 2 * Math.log(e0 + p0);
  const eps = 2 * Math.log(e + p);
  const product = p0 * p;
  const log = 2 * Math.log((e0 * e + product - 1) / k);
  const inner =
    ((8 / 3) * e0 * e) / product +
    ((k * k) / product ** 3) * (e0 * e0 * e * e + p02 * p2) +
    (k / (2 * product)) *
      (((e0 * e + p02) / (p02 * p0)) * eps0 - ((e0 * e + p2) / (p2 * p)) * eps + (2 * k * e0 * e) / (p2 * p02));
  const born =
    (p / p0) *
    (4 / 3 -
      (2 * e0 * e * (p2 + p02)) / (p02 * p2) +
      (eps0 * e) / (p02 * p0) +
      (eps * e0) / (p2 * p) -
      (eps * eps0) / product +
      log * inner);
  const beta0 = p0 / e0;
  const beta = p / e;
  const x = 2 * Math.PI * z * ALPHA;
  const elwert = (beta0 * -Math.expm1(-x / beta0)) / (beta * -Math.expm1(-x / beta));
  return Math.max(0, born * elwert);
}
