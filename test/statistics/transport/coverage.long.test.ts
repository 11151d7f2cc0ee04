import { expect, it } from 'vitest';
import { referenceDoses } from '../../../server/shielding/effort.ts';
import { shieldResponse } from '../../../server/shielding/response.ts';

/** Source: the normal distribution: of 200 runs 95.4 % lie within two of their own standard errors of the mean of all. */
const SEEDS = 200;
const WITHIN = [0.92, 0.98] as const;

it.each(['slab', 'sphere'] as const)('error bars of a %s are honest over 200 seeds', (geometry) => {
  const runs = Array.from({ length: SEEDS }, (_, seed) => {
    const { electron } = shieldResponse(
      { geometry, layers: [{ materialId: 'Al', thicknessMm: 0.3 }] },
      { effort: 'standard', targetMaterialId: 'Si', seed: 1000 + seed },
    );
    const both = electron.doseGyCm2.map((dose, bin) => dose + electron.bremsstrahlungGyCm2[bin]);
    const doses = referenceDoses(both);
    // Variances add over bins with the squares of the weights: take the square root of the fold of squares per spectrum.
    const sigmas = doses.map((_dose, k) => {
      let square = 0;
      for (let bin = 0; bin < both.length; bin++) {
        const only = new Float64Array(both.length);
        only[bin] = Math.hypot(electron.doseSigmaGyCm2[bin], electron.bremsstrahlungSigmaGyCm2[bin]);
        square += referenceDoses(only)[k] ** 2;
      }
      return Math.sqrt(square);
    });
    return { doses, sigmas };
  });
  const spectra = runs[0].doses.length;
  let covered = 0;
  for (let k = 0; k < spectra; k++) {
    const mean = runs.reduce((sum, run) => sum + run.doses[k], 0) / SEEDS;
    covered += runs.filter((run) => Math.abs(run.doses[k] - mean) < 2 * run.sigmas[k]).length;
  }
  const share = covered / (SEEDS * spectra);
  expect(share).toBeGreaterThan(WITHIN[0]);
  expect(share).toBeLessThan(WITHIN[1]);
});
