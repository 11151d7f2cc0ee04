import { readReferenceJson } from '../constants/reference.ts';
import { ELECTRON_REST_MEV } from './electronStopping.ts';

interface MottData {
  readonly energyMeV: readonly number[];
  readonly elements: Readonly<Record<string, { readonly z: number; readonly c: readonly (readonly number[])[] }>>;
}

const DATA = readReferenceJson<MottData>('elastic', 'mott.json');
const BY_Z = Object.values(DATA.elements).sort((a, b) => a.z - b.z);
const LOG_T = Float64Array.from(DATA.energyMeV, Math.log);

/** Fine-structure constant, ħc in MeV cm, Bohr radius in cm, Avogadro (CODATA 2018). */
export const ALPHA = 7.2973525693e-3;
const HBAR_C_MEV_CM = 1.973269804e-11;
const BOHR_RADIUS_CM = 0.529177210903e-8;
export const AVOGADRO = 6.02214076e23;

/**
 * Coefficients of the exact Mott ratio, R(θ) = Σ c_j (1 − cos θ)^(j/2), linear in ln T and in Z between the tabulated
 * elements; clamped to 10 keV - 50 MeV.
 *
 * @param out - shape (6,); overwritten
 */
export function mottCoefficientsInto(z: number, energyMeV: number, out: Float64Array): Float64Array {
  let i = 0;
  while (i < BY_Z.length - 2 && BY_Z[i + 1].z <= z) i += 1;
  const shareZ = Math.min(1, Math.max(0, (z - BY_Z[i].z) / (BY_Z[i + 1].z - BY_Z[i].z)));
  const logT = Math.min(Math.max(Math.log(energyMeV), LOG_T[0]), LOG_T[LOG_T.length - 1]);
  let k = 0;
  while (k < LOG_T.length - 2 && LOG_T[k + 1] <= logT) k += 1;
  const shareT = (logT - LOG_T[k]) / (LOG_T[k + 1] - LOG_T[k]);
  for (let j = 0; j < 6; j++) {
    const low = BY_Z[i].c[k][j] * (1 - shareT) + BY_Z[i].c[k + 1][j] * shareT;
    const high = BY_Z[i + 1].c[k][j] * (1 - shareT) + BY_Z[i + 1].c[k + 1][j] * shareT;
    out[j] = low + shareZ * (high - low);
  }
  return out;
}

/** R at x = 1 − cos θ from its coefficients. */
export function mottRatio(c: Float64Array, x: number): number {
  const s = Math.sqrt(x);
  return c[0] + s * (c[1] + s * (c[2] + s * (c[3] + s * (c[4] + s * c[5]))));
}

/**
 * Molière's screening parameter A of dσ ∝ 1/(μ + A)², μ = (1 − cos θ)/2, dimensionless:
 * A = (ħ/2pa)² [1.13 + 3.76 (αZ/β)²], a = 0.885 a₀ Z^−1/3.
 *
 * @source Molière (1947), Z. Naturforsch. 2a, 133; Bethe (1953), Phys. Rev. 89, 1256
 */
export function moliereScreening(z: number, energyMeV: number): number {
  const pc2 = energyMeV * (energyMeV + 2 * ELECTRON_REST_MEV);
  const beta2 = pc2 / (energyMeV + ELECTRON_REST_MEV) ** 2;
  const radius = 0.885 * BOHR_RADIUS_CM * z ** (-1 / 3);
  const chi = HBAR_C_MEV_CM / (2 * radius);
  return ((chi * chi) / pc2) * (1.13 + (3.76 * (ALPHA * z) ** 2) / beta2);
}

/**
 * Strength of screened Rutherford scattering per gram of the element, cm²/g: dσ/dμ = strength · R / (μ + A)².
 * (Z α ħc / (p β c))² π per atom.
 */
export function rutherfordStrength(z: number, atomicMassGPerMol: number, energyMeV: number): number {
  const pc2 = energyMeV * (energyMeV + 2 * ELECTRON_REST_MEV);
  const beta2 = pc2 / (energyMeV + ELECTRON_REST_MEV) ** 2;
  const length2 = (z * ALPHA * HBAR_C_MEV_CM) ** 2 / (pc2 * beta2);
  return (Math.PI * length2 * AVOGADRO) / atomicMassGPerMol;
}
