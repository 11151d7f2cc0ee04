import { describe, expect, it } from 'vitest';
import { foldDamage } from '../../../server/dose/index.ts';
import { nielSilicon } from '../../../server/matter/index.ts';
import { edgesMeV, type Species } from '../../../server/numeric/spectrumGrid.ts';
import { toyResponse } from '../../unit/margin/toy.ts';

/** An unshielded response: damage per unit fluence is the NIEL itself, here at the middle of each bin. */
function bare(): ReturnType<typeof toyResponse> {
  const response = toyResponse({ name: 'bare' });
  const fill = (species: Species, out: Float64Array): void => {
    const edges = edgesMeV(species);
    for (let i = 0; i < out.length; i++) out[i] = nielSilicon(species, Math.sqrt(edges[i] * edges[i + 1]));
  };
  fill('electron', response.electron.damageMeVCm2PerG);
  fill('proton', response.proton.damageMeVCm2PerG);
  return response;
}

/** 1e10 particles per cm² in the bin that holds an energy. */
function nearlyMono(species: Species, energyMeV: number): Parameters<typeof foldDamage>[0] {
  const spectra = { electronPerCm2: new Float64Array(90), protonPerCm2: new Float64Array(120) };
  const edges = edgesMeV(species);
  const bin = edges.findIndex((edge) => edge > energyMeV) - 1;
  (species === 'electron' ? spectra.electronPerCm2 : spectra.protonPerCm2)[bin] = 1e10;
  return spectra;
}

describe('1 MeV neutron equivalent in silicon', () => {
  // Source: damage functions D / (95 MeV mb) of the compilation of A. Vasilescu & G. Lindstroem: protons 7 to 10 MeV
  // and electrons from G.P. Summers et al., IEEE Trans. Nucl. Sci. 40 (1993) 1372. A bin is 10 % wide in energy, so
  // the damage at its middle differs from that at the energy named by at most 5 %.
  const BIN_TOLERANCE_REL = 0.05;
  it.each<[Species, number, number]>([
    ['proton', 10, 3.871],
    ['electron', 1, 0.01543],
    ['electron', 10, 0.0516],
    ['electron', 100, 0.0787],
  ])('%s of %d MeV count %d neutrons each', (species, energyMeV, hardness) => {
    const energy = species === 'electron' && energyMeV === 100 ? 99 : energyMeV;
    const { neutronEquivalentPerCm2 } = foldDamage(nearlyMono(species, energy), bare());
    expect(Math.abs(neutronEquivalentPerCm2 / (1e10 * hardness) - 1)).toBeLessThan(BIN_TOLERANCE_REL);
  });
});
