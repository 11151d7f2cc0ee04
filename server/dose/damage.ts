/** Displacement damage in silicon behind a shield. */
import { NEUTRON_1MEV_NIEL_MEV_CM2_PER_G } from '../matter/index.ts';
import type { ShieldResponse } from '../shielding/types.ts';
import { dot } from './fold.ts';
import type { FluenceSpectra } from './types.ts';

export interface DamageDose {
  readonly electronMeVPerG: number;
  readonly protonMeVPerG: number;
  readonly totalMeVPerG: number;
  /** 1 MeV neutron equivalent fluence in silicon, cm⁻². */
  readonly neutronEquivalentPerCm2: number;
}

/** Displacement damage dose by species and as 1 MeV neutrons, from the damage responses of a shield. */
export function foldDamage(spectra: FluenceSpectra, response: ShieldResponse): DamageDose {
  const electronMeVPerG = dot(spectra.electronPerCm2, response.electron.damageMeVCm2PerG);
  const protonMeVPerG = dot(spectra.protonPerCm2, response.proton.damageMeVCm2PerG);
  const totalMeVPerG = electronMeVPerG + protonMeVPerG;
  return {
    electronMeVPerG,
    protonMeVPerG,
    totalMeVPerG,
    neutronEquivalentPerCm2: totalMeVPerG / NEUTRON_1MEV_NIEL_MEV_CM2_PER_G,
  };
}
