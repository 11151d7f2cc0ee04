import { readReferenceColumns } from '../constants/reference.ts';
import { gaussLegendre } from '../numeric/gaussLegendre.ts';
import { ElementTable } from './elementTable.ts';
import { zOverA } from './materials.ts';
import type { Material, SternheimerFit } from './types.ts';

/** m_e c², MeV (CODATA 2018). */
export const ELECTRON_REST_MEV = 0.51099895;
/** 2π N_A r_e² m_e c², MeV cm²/mol (CODATA 2018: 0.3070749 / 2). */
export const TWO_PI_NA_RE2_MC2 = 0.15353746;

/** Density effect δ at βγ; Sternheimer's form. */
export function densityEffect(fit: SternheimerFit, betaGamma: number): number {
  const x = Math.log10(betaGamma);
  if (x >= fit.x1) return 2 * Math.LN10 * x - fit.cBar;
  if (x >= fit.x0) return 2 * Math.LN10 * x - fit.cBar + fit.a * (fit.x1 - x) ** fit.k;
  return fit.delta0 * 10 ** (2 * (x - fit.x0));
}

/**
 * Collision mass stopping power of electrons, MeV cm²/g: Berger & Seltzer's form of the Møller-Bethe theory.
 *
 * Within 0.5 % of NIST ESTAR from 10 keV to 100 MeV.
 *
 * @source ICRU Report 37 (1984), eqs 3.1, 3.2; Sternheimer, Berger & Seltzer (1984) for δ
 */
export function electronCollisionStopping(of: Material, energyMeV: number): number {
  const tau = energyMeV / ELECTRON_REST_MEV;
  const gamma = tau + 1;
  const beta2 = (tau * (tau + 2)) / (gamma * gamma);
  const excitation = (of.meanExcitationEv * 1e-6) / ELECTRON_REST_MEV;
  const f = 1 - beta2 + ((tau * tau) / 8 - (2 * tau + 1) * Math.LN2) / (gamma * gamma);
  const delta = densityEffect(of.sternheimer, Math.sqrt(tau * (tau + 2)));
  const bracket = Math.log((tau * tau * (tau + 2)) / (2 * excitation * excitation)) + f - delta;
  return ((TWO_PI_NA_RE2_MC2 * zOverA(of)) / beta2) * bracket;
}

/**
 * Collision stopping power restricted to transfers below `cutMeV`, MeV cm²/g (ICRU Report 37, eq. 3.6 form).
 * Equals the unrestricted one for cuts of half the energy and more.
 */
export function restrictedCollisionStopping(of: Material, energyMeV: number, cutMeV: number): number {
  const full = electronCollisionStopping(of, energyMeV);
  if (cutMeV >= energyMeV / 2) return full;
  return full - mollerLoss(of, energyMeV, cutMeV);
}

/** ∫ W dσ of Møller scattering from the cut to T/2, MeV cm²/g. */
export function mollerLoss(of: Material, energyMeV: number, cutMeV: number): number {
  const gamma = 1 + energyMeV / ELECTRON_REST_MEV;
  const beta2 = 1 - 1 / (gamma * gamma);
  const a = (gamma - 1) ** 2 / (gamma * gamma);
  const e = cutMeV / energyMeV;
  const b = 1 - 2 * gamma;
  // ∫ ε [1/ε² + 1/(1−ε)² + a + b'/(ε(1−ε))] dε from e to 1/2 with b' = −(2γ−1)/γ².
  const bPrime = b / (gamma * gamma);
  const first = Math.log(0.5 / e);
  const second = 1 / 0.5 - 1 / (1 - e) + Math.log(0.5 / (1 - e));
  const third = (a / 2) * (0.25 - e * e);
  const fourth = bPrime * (-Math.log(0.5) + Math.log(1 - e));
  return ((TWO_PI_NA_RE2_MC2 * zOverA(of)) / beta2) * (first + second + third + fourth);
}

/** NIST ESTAR; S A/Z² is smooth in Z at every energy. */
const RADIATIVE = new ElementTable(
  readReferenceColumns('electron-stopping', 'radiative.csv'),
  (stopping, z, a) => (stopping * a) / (z * z),
);

/**
 * Radiative mass stopping power, MeV cm²/g: NIST ESTAR per element, log-log in energy, linear in Z between the tabulated
 * elements, added by mass.
 */
export function electronRadiativeStopping(of: Material, energyMeV: number): number {
  let sum = 0;
  for (const { z, atomicMassGPerMol, massFraction } of of.constituents) {
    sum += (massFraction * z * z * Math.exp(RADIATIVE.logAt(z, Math.log(energyMeV)))) / atomicMassGPerMol;
  }
  return sum;
}

const NODES = gaussLegendre(8);
/** CSDA ranges start from the range at 10 keV, S there taken as ∝ T^−0.78: 1 % of the range at 50 keV. */
const RANGE_START_MEV = 0.01;
const RANGE_EXPONENT = 0.78;

/** Continuous-slowing-down range, g/cm², by quadrature of 1/S in ln T; 1 % from 50 keV up. */
export function electronCsdaRange(of: Material, energyMeV: number): number {
  const stopping = (t: number) => electronCollisionStopping(of, t) + electronRadiativeStopping(of, t);
  const start = RANGE_START_MEV / (stopping(RANGE_START_MEV) * (1 + RANGE_EXPONENT));
  return start + integrateLog(RANGE_START_MEV, energyMeV, (t) => t / stopping(t));
}

/** Radiation yield: the share of an electron's energy that goes into bremsstrahlung as it slows down to rest. */
export function radiationYield(of: Material, energyMeV: number): number {
  const integrand = (t: number) => {
    const radiative = electronRadiativeStopping(of, t);
    return (t * radiative) / (radiative + electronCollisionStopping(of, t));
  };
  const start =
    (RANGE_START_MEV * electronRadiativeStopping(of, RANGE_START_MEV)) /
    (electronCollisionStopping(of, RANGE_START_MEV) * (1 + RANGE_EXPONENT));
  return (start + integrateLog(RANGE_START_MEV, energyMeV, integrand)) / energyMeV;
}

/** ∫ f(T) d ln T with eight Gauss nodes a panel, eight panels a decade. */
function integrateLog(from: number, to: number, f: (energyMeV: number) => number): number {
  if (to <= from) return 0;
  const panels = Math.max(1, Math.ceil(8 * Math.log10(to / from)));
  const width = Math.log(to / from) / panels;
  let sum = 0;
  for (let p = 0; p < panels; p++) {
    for (let k = 0; k < NODES.x.length; k++) {
      sum += 0.5 * width * NODES.w[k] * f(from * Math.exp(width * (p + 0.5 * (1 + NODES.x[k]))));
    }
  }
  return sum;
}
