import { readReferenceColumns } from '../constants/reference.ts';
import type { Material } from './types.ts';

const TABLE = readReferenceColumns('proton-stopping', 'electronic.csv');
const LOG_T = TABLE.get('T_MeV')!.map(Math.log);
/** Energies of the tables, MeV. */
export const PROTON_ENERGY_RANGE_MEV = [0.005, 2000] as const;

/** Elements with a table, by Z; ln(S A / Z) is smooth in Z. */
const ELEMENTS = [
  ['H', 1, 1.00794],
  ['C', 6, 12.0107],
  ['N', 7, 14.0067],
  ['O', 8, 15.9994],
  ['Al', 13, 26.9815386],
  ['Si', 14, 28.0855],
  ['Ti', 22, 47.867],
  ['Fe', 26, 55.845],
  ['Ni', 28, 58.6934],
  ['Cu', 29, 63.546],
  ['Sn', 50, 118.71],
  ['Ta', 73, 180.94788],
  ['W', 74, 183.84],
  ['Pb', 82, 207.2],
].map(([symbol, z, a]) => ({
  z: z as number,
  logS: TABLE.get(symbol as string)!.map((s) => Math.log((s * (a as number)) / (z as number))),
}));
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
  if (compound !== undefined) return Math.exp(at(compound, logT));
  let sum = 0;
  for (const { z, atomicMassGPerMol, massFraction } of of.constituents) {
    let i = 0;
    while (i < ELEMENTS.length - 2 && ELEMENTS[i + 1].z <= z) i += 1;
    const share = (z - ELEMENTS[i].z) / (ELEMENTS[i + 1].z - ELEMENTS[i].z);
    const low = at(ELEMENTS[i].logS, logT);
    const value = share === 0 ? low : low + share * (at(ELEMENTS[i + 1].logS, logT) - low);
    sum += (massFraction * z * Math.exp(value)) / atomicMassGPerMol;
  }
  return sum;
}

function at(values: Float64Array, logT: number): number {
  let low = 0;
  let high = LOG_T.length - 1;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (LOG_T[middle] <= logT) low = middle;
    else high = middle;
  }
  return values[low] + ((logT - LOG_T[low]) / (LOG_T[high] - LOG_T[low])) * (values[high] - values[low]);
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
    return Math.exp(line(this.logT, this.logR, Math.log(energyMeV)));
  }

  /** Kinetic energy of a residual range, MeV; 0 below the range of the lowest energy. */
  energyMeV(rangeGPerCm2: number): number {
    const logR = Math.log(rangeGPerCm2);
    if (!(logR >= this.logR[0])) return 0;
    return Math.exp(line(this.logR, this.logT, logR));
  }
}

/** Piecewise linear in logarithms, extended at both ends. */
function line(x: Float64Array, y: Float64Array, value: number): number {
  let low = 0;
  let high = x.length - 1;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (x[middle] <= value) low = middle;
    else high = middle;
  }
  return y[low] + ((value - x[low]) / (x[high] - x[low])) * (y[high] - y[low]);
}
