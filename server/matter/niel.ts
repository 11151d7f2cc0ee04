import { readReferenceJson } from '../constants/reference.ts';
import type { Species } from '../numeric/spectrumGrid.ts';

interface NielRow {
  readonly energyMeV: readonly number[];
  readonly nielMeVCm2PerG: readonly number[];
}

const DATA = readReferenceJson<Readonly<Record<Species, NielRow>>>('niel', 'silicon.json');

/** NIEL of 1 MeV neutrons in silicon: 95 MeV mb (ASTM E722) × N_A / 28.0855 g/mol, MeV cm²/g. */
export const NEUTRON_1MEV_NIEL_MEV_CM2_PER_G = (95e-27 * 6.02214076e23) / 28.0855;

/**
 * Non-ionising energy loss in silicon, MeV cm²/g, log-log between the published points. Below the first electron point
 * (0.3 MeV, near the displacement threshold) zero; outside the table otherwise the last slope is held flat.
 */
export function nielSilicon(species: Species, energyMeV: number): number {
  const { energyMeV: x, nielMeVCm2PerG: y } = DATA[species];
  if (energyMeV < x[0]) return species === 'electron' ? 0 : y[0];
  if (energyMeV >= x[x.length - 1]) return y[y.length - 1];
  let i = 0;
  while (x[i + 1] <= energyMeV) i += 1;
  const share = Math.log(energyMeV / x[i]) / Math.log(x[i + 1] / x[i]);
  return y[i] * (y[i + 1] / y[i]) ** share;
}
