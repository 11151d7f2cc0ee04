/** Source: NIST SRD 124 (ESTAR, PSTAR) and NISTIR 5632, see fixtures/golden/matter/README.md. */
import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import {
  electronCollisionStopping,
  electronCsdaRange,
  electronRadiativeStopping,
  type Material,
  material,
  ProtonRange,
  photonAttenuation,
  protonStopping,
  radiationYield,
} from '../../../server/matter/index.ts';

const DATA = JSON.parse(
  readFileSync(new URL('../../../fixtures/golden/matter/nist.json', import.meta.url), 'utf8'),
) as Record<string, { energiesMeV: number[]; byMaterial: Record<string, number[]> }>;
const ranges = new Map<string, ProtonRange>();
const protonRange = (of: Material, energyMeV: number) => {
  const table = ranges.get(of.id) ?? new ProtonRange(of);
  ranges.set(of.id, table);
  return table.rangeGPerCm2(energyMeV);
};

/** Quantity, our function, from which energy, relative tolerance and its reason. */
const CHECKS = [
  ['electronCollisionMeVCm2PerG', electronCollisionStopping, 0.01, 0.005, 'target of the theory against ESTAR'],
  ['electronCsdaGPerCm2', electronCsdaRange, 0.05, 0.015, 'start of the range at 10 keV by a power law'],
  ['electronRadiativeMeVCm2PerG', electronRadiativeStopping, 0.01, 0.015, 'compounds added by mass'],
  ['radiationYield', radiationYield, 0.05, 0.03, 'as the two it is made of'],
  ['protonElectronicMeVCm2PerG', protonStopping, 0.05, 0.005, 'tables interpolated'],
  ['protonCsdaGPerCm2', protonRange, 1, 0.02, 'nuclear stopping left out, below 1 MeV not claimed'],
  ['photonAttenuationCm2PerG', photonAttenuation, 0.01, 0.01, 'evaluated library against NIST, off edges'],
] as const;

describe('matter against NIST', () => {
  for (const [quantity, ours, fromMeV, tolerance, reason] of CHECKS) {
    const { energiesMeV, byMaterial } = DATA[quantity];
    for (const [id, values] of Object.entries(byMaterial)) {
      it(`${quantity} of ${id} within ${tolerance} (${reason})`, () => {
        energiesMeV.forEach((energy, i) => {
          if (energy < fromMeV) return;
          const error = ours(material(id), energy) / values[i] - 1;
          expect(Math.abs(error), `at ${energy} MeV`).toBeLessThan(tolerance);
        });
      });
    }
  }
});
