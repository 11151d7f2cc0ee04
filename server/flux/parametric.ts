import type { PlanetId } from '../constants/planets.ts';
import { readReferenceJson } from '../constants/reference.ts';

/**
 * The tables of the parametric belts and their interpolation in L.
 *
 * j(E, α, L) = A(L) · S(E; L)/S(1; L) · X(E, L) · D(E, L) · sinⁿα with S = E (E + E_k)^−(1+γ₁) / (1 + (E/E_b)^γ₂);
 * logA, γ₁, log E_b, γ₂, log E_k, n and σ go linearly in ln L. Zero outside the table.
 */
export interface SpeciesTable {
  readonly E_range_MeV: readonly [number, number];
  readonly L: readonly number[];
  readonly logA: readonly number[];
  readonly g1: readonly number[];
  readonly Eb: readonly number[];
  readonly g2: readonly number[];
  readonly Ek: readonly number[];
  readonly n: readonly number[];
  readonly sigma_dex: readonly number[];
  readonly status: readonly string[];
}

export interface PlanetBelts {
  readonly electron: SpeciesTable;
  readonly proton: SpeciesTable;
  readonly electronCutoffMeV: number;
  readonly protonMomentumLimitMeVcL2: number;
  readonly dips: readonly { readonly moon: string; readonly Lc: number; readonly w: number; readonly d: number }[];
  readonly protonUpperBound: { readonly L: readonly number[]; readonly omniAbove10MeVPerCm2S: readonly number[] };
}

export function planetBelts(planet: PlanetId): PlanetBelts {
  return readReferenceJson<Record<PlanetId, PlanetBelts>>('belts', 'parametric.json')[planet];
}

/** Parameters of one species at one L. Reused between calls. */
export interface SpectrumAtL {
  inside: boolean;
  /** ln of A(L)/S(1; L). */
  logScale: number;
  g1: number;
  logEb: number;
  g2: number;
  ek: number;
  n: number;
  sigmaDex: number;
}

export function makeSpectrumAtL(): SpectrumAtL {
  return { inside: false, logScale: 0, g1: 0, logEb: 0, g2: 0, ek: 0, n: 0, sigmaDex: 0 };
}

export class SpeciesProfile {
  readonly energyMinMeV: number;
  readonly energyMaxMeV: number;
  readonly lMin: number;
  readonly lMax: number;
  private readonly lnL: Float64Array;
  private readonly table: SpeciesTable;

  constructor(table: SpeciesTable) {
    this.table = table;
    [this.energyMinMeV, this.energyMaxMeV] = table.E_range_MeV;
    this.lMin = table.L[0];
    this.lMax = table.L[table.L.length - 1];
    this.lnL = Float64Array.from(table.L, Math.log);
  }

  atInto(lShell: number, out: SpectrumAtL): SpectrumAtL {
    const { table, lnL } = this;
    out.inside = lShell >= this.lMin && lShell <= this.lMax;
    if (!out.inside) return out;
    const at = Math.log(lShell);
    let i = 0;
    while (i < lnL.length - 2 && lnL[i + 1] < at) i += 1;
    const share = (at - lnL[i]) / (lnL[i + 1] - lnL[i]);
    const mix = (values: readonly number[]) => values[i] + share * (values[i + 1] - values[i]);
    out.g1 = mix(table.g1);
    out.logEb = Math.log(table.Eb[i]) + share * Math.log(table.Eb[i + 1] / table.Eb[i]);
    out.g2 = mix(table.g2);
    out.ek = table.Ek[i] * (table.Ek[i + 1] / table.Ek[i]) ** share;
    out.n = mix(table.n);
    out.sigmaDex = mix(table.sigma_dex);
    out.logScale = 0;
    out.logScale = mix(table.logA) * Math.LN10 - logShape(1, out);
    return out;
  }
}

/** ln of A · S(E)/S(1) of a spectrum, E in MeV. */
export function logShape(energyMeV: number, at: SpectrumAtL): number {
  const logE = Math.log(energyMeV);
  return (
    at.logScale + logE - (1 + at.g1) * Math.log(energyMeV + at.ek) - Math.log1p(Math.exp(at.g2 * (logE - at.logEb)))
  );
}
