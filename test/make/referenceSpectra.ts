/**
 * Writes db/reference/reference-spectra/electrons.json: the electron spectra that the number of histories of a response is
 * set by. Run with `npx tsx test/make/referenceSpectra.ts`; the file is versioned, so that a change of the belts does not
 * move a response.
 */
import { writeFileSync } from 'node:fs';
import { logShape, makeSpectrumAtL, planetBelts, SpeciesProfile } from '../../server/flux/parametric.ts';
import { ELECTRON_EDGES_MEV } from '../../server/numeric/spectrumGrid.ts';

const DIGITS = 4;
const POWER = 2.5;

const spectra = (['uranus', 'neptune'] as const).flatMap((planet) => {
  const table = planetBelts(planet).electron;
  const profile = new SpeciesProfile(table);
  return table.L.map((lShell) => {
    const at = profile.atInto(lShell, makeSpectrumAtL());
    return {
      name: `${planet} belt electrons at L ${lShell}`,
      weights: perBin((energy) => {
        const inside = energy >= profile.energyMinMeV && energy <= profile.energyMaxMeV;
        return inside ? Math.exp(logShape(energy, at)) : 0;
      }),
    };
  });
});
spectra.push({ name: `power law E^-${POWER}, 0.02 to 100 MeV`, weights: perBin((energy) => energy ** -POWER) });

/** Share of the particles in each bin, by the middle of the bin in ln E. */
function perBin(differential: (energyMeV: number) => number): number[] {
  const counts = Array.from({ length: ELECTRON_EDGES_MEV.length - 1 }, (_, bin) => {
    const [low, high] = [ELECTRON_EDGES_MEV[bin], ELECTRON_EDGES_MEV[bin + 1]];
    const middle = Math.sqrt(low * high);
    return differential(middle) * middle * Math.log(high / low);
  });
  const total = counts.reduce((sum, count) => sum + count, 0);
  return counts.map((count) => Number((count / total).toPrecision(DIGITS)));
}

writeFileSync(
  new URL('../../db/reference/reference-spectra/electrons.json', import.meta.url),
  `{"version":1,"spectra":[\n${spectra.map((spectrum) => JSON.stringify(spectrum)).join(',\n')}\n]}\n`,
);
