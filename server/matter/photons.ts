import { readReferenceJson } from '../constants/reference.ts';
import type { Material } from './types.ts';

interface PhotonRow {
  readonly energyMeV: readonly number[];
  readonly photo: readonly number[];
  readonly compton: readonly number[];
  readonly rayleigh: readonly number[];
  readonly pair: readonly number[];
}

const DATA = readReferenceJson<Readonly<Record<string, PhotonRow>>>('photon', 'photon.json');

/** Mass attenuation by process, cm²/g. */
export interface PhotonCrossSections {
  photo: number;
  compton: number;
  rayleigh: number;
  pair: number;
}

/**
 * Photon mass attenuation coefficients of a material, cm²/g, log-log interpolated per element and added by mass.
 * Valid 1 keV to 100 MeV; within 1 % of NIST XAAMDI away from absorption edges.
 */
export function photonCrossSections(of: Material, energyMeV: number): PhotonCrossSections {
  const out = { photo: 0, compton: 0, rayleigh: 0, pair: 0 };
  for (const { symbol, massFraction } of of.constituents) {
    const row = DATA[symbol];
    const grid = row.energyMeV;
    let low = 0;
    let high = grid.length - 1;
    while (high - low > 1) {
      const middle = (low + high) >> 1;
      if (grid[middle] <= energyMeV) low = middle;
      else high = middle;
    }
    const share = Math.log(energyMeV / grid[low]) / Math.log(grid[high] / grid[low]);
    const at = (values: readonly number[]) => {
      const a = values[low];
      const b = values[high];
      return a > 0 && b > 0 ? a * (b / a) ** share : a + share * (b - a);
    };
    out.photo += massFraction * at(row.photo);
    out.compton += massFraction * at(row.compton);
    out.rayleigh += massFraction * at(row.rayleigh);
    out.pair += massFraction * at(row.pair);
  }
  return out;
}

/** Total with coherent scattering, cm²/g. */
export function photonAttenuation(of: Material, energyMeV: number): number {
  const parts = photonCrossSections(of, energyMeV);
  return parts.photo + parts.compton + parts.rayleigh + parts.pair;
}
