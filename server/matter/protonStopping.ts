import { readReferenceColumns } from '../constants/reference.ts';
import { ElementTable, piecewiseLinear } from './elementTable.ts';
import type { Material } from './types.ts';

const TABLE = readReferenceColumns('proton-stopping', 'electronic.csv');
const LOG_T = TABLE.get('T_MeV')!.map(Math.log);
/** Energies of the tables, MeV. */
export const PROTON_ENERGY_RANGE_MEV = [0.005, 2000] as const;
/** NIST PSTAR; S A/Z is smooth in Z. */
const ELEMENTS = new ElementTable(TABLE, (stopping, z, a) => (stopping * a) / z);
const LOG_COMPOUND = new Map(
  ['SiO2', 'kapton', 'polyethylene', 'water'].map((id) => [id, TABLE.get(id)!.map(Math.log)]),
);

/**
 * Electronic mass stopping power of protons, MeV cm²/g: NIST PSTAR log-log interpolated (0.5 %); compounds outside PSTAR
 * add by mass, elements outside it are interpolated in Z (2-5 %).
 */
export function protonStopping(of: Material, energyMeV: number): number {
  const logT = Math.log(energyMeV);
  const compound = LOG_COMPOUND.get(of.id);
  if (compound !== undefined) return Math.exp(piecewiseLinear(LOG_T, compound, logT));
  let sum = 0;
  for (const { z, atomicMassGPerMol, massFraction } of of.constituents) {
    sum += (massFraction * z * Math.exp(ELEMENTS.logAt(z, logT))) / atomicMassGPerMol;
  }
  return sum;
}

/** Range table of one material: CSDA range in g/cm² against ln T, and its inverse, both by cubic-free log-log lines. */
export class ProtonRange {
  private readonly logT: Float64Array;
  private readonly logR: Float64Array;

  constructor(of: Material) {
    const perDecade = 60;
    const [first, last] = PROTON_ENERGY_RANGE_MEV;
    const count = Math.ceil(Math.log10(last / first) * perDecade);
    const step = Math.log(last / first) / count;
    this.logT = Float64Array.from({ length: count + 1 }, (_, i) => Math.log(first) + i * step);
    this.logR = new Float64Array(count + 1);
    // Below the table S ∝ T^0.45 (slow protons): R = T / (0.55 S).
    let range = first / (0.55 * protonStopping(of, first));
    this.logR[0] = Math.log(range);
    for (let i = 1; i <= count; i++) {
      const a = Math.exp(this.logT[i - 1]);
      const m = Math.exp(this.logT[i - 1] + step / 2);
      const b = Math.exp(this.logT[i]);
      range += (step / 6) * (a / protonStopping(of, a) + (4 * m) / protonStopping(of, m) + b / protonStopping(of, b));
      this.logR[i] = Math.log(range);
    }
  }

  /** CSDA range at a kinetic energy, g/cm². */
  rangeGPerCm2(energyMeV: number): number {
    return Math.exp(piecewiseLinear(this.logT, this.logR, Math.log(energyMeV)));
  }

  /** Kinetic energy of a residual range, MeV; 0 below the range of the lowest energy. */
  energyMeV(rangeGPerCm2: number): number {
    const logR = Math.log(rangeGPerCm2);
    if (!(logR >= this.logR[0])) return 0;
    return Math.exp(piecewiseLinear(this.logR, this.logT, logR));
  }
}
