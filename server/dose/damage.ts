/** Displacement damage in silicon behind a shield. */
import type { ShieldResponse } from '../shielding/types.ts';
import { dot } from './fold.ts';
import type { FluenceSpectra } from './types.ts';

/**
 * Non-ionising energy loss of 1 MeV neutrons in silicon, MeV cm²/g: the displacement kerma cross-section of 95 MeV mb
 * times Avogadro's number over 28.0855 g/mol, 2.037e-3.
 *
 * @source ASTM E722, reference value 95 MeV mb at 1 MeV; as used by G.P. Summers et al., IEEE Trans. Nucl. Sci. 40
 *   (1993) 1372 and the silicon damage compilation of Vasilescu & Lindstroem. Avogadro's number exact (SI 2019).
 */
export const NEUTRON_1MEV_NIEL_MEV_CM2_PER_G = (95e-27 * 6.02214076e23) / 28.0855;

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
