/**
 * Source: fixtures/golden/belts/README.md (independent evaluation of the same tables); Mauk & Fox (2010), J. Geophys. Res.
 * 115, A12220, Table 1 (anchor spectra); Selesnick & Stone (1991), J. Geophys. Res. 96, 5651 (index 5-7, from memory).
 */
import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import type { PlanetId } from '../../../server/constants/planets.ts';
import { type BeltModel, beltModel, defaultBeltModelId } from '../../../server/flux/index.ts';
import type { Species } from '../../../server/numeric/spectrumGrid.ts';

const WIDE_LOSS_NT = 1e30;

function integral(model: BeltModel, species: Species, lShell: number, fromMeV: number): number {
  const top = species === 'electron' ? 40 : 100;
  const count = 3000;
  const energies = Float64Array.from({ length: count + 1 }, (_, i) => fromMeV * (top / fromMeV) ** (i / count));
  const flux = model.omnidirectionalInto(
    species,
    lShell,
    100,
    100,
    WIDE_LOSS_NT,
    energies,
    new Float64Array(count + 1),
  );
  const step = Math.log(top / fromMeV) / count;
  return flux.reduce((sum, f, i) => sum + (i === 0 || i === count ? 0.5 : 1) * f * energies[i] * step, 0);
}

describe('equatorial fluxes', () => {
  const rows = readFileSync(new URL('../../../fixtures/golden/belts/equatorial.csv', import.meta.url), 'utf8')
    .trim()
    .split('\n')
    .slice(1);
  for (const row of rows) {
    const [planet, l, ...published] = row.split(',');
    it(`${planet} L ${l} to 1 %`, () => {
      const model = beltModel(defaultBeltModelId(planet as PlanetId));
      const ours = [
        ...[0.1, 0.5, 1, 2, 5, 10].map((e) => integral(model, 'electron', Number(l), e)),
        ...[0.03, 1, 10].map((e) => integral(model, 'proton', Number(l), e)),
      ];
      published.forEach((value, i) => {
        if (Number(value) > 0) expect(Math.abs(ours[i] / Number(value) - 1), `column ${i}`).toBeLessThan(0.01);
      });
    });
  }
});

describe('published spectra', () => {
  it('keeps the anchor at L 4.73 within the fit, 0.03 to 2 MeV', () => {
    const model = beltModel(defaultBeltModelId('uranus'));
    // Published form in keV: C E (E + kT(1+g1))^-(1+g1) / (1 + (E/E0)^g2), here per MeV.
    const published = (mev: number) => {
      const kev = mev * 1000;
      return (1000 * 6.5e6 * kev * (kev + 0.001 * 2.101) ** -2.101) / (1 + (kev / 1189) ** 5.604);
    };
    for (const mev of [0.03, 0.1, 0.5, 1, 2]) {
      expect(Math.abs(model.directional('electron', mev, 4.73, 1) / published(mev) - 1)).toBeLessThan(0.03);
    }
  });

  it('has electron indices of 5 to 7 between 0.7 and 2.5 MeV at L 6 to 15', () => {
    const model = beltModel(defaultBeltModelId('uranus'));
    for (const lShell of [6, 7, 8, 10, 12, 15]) {
      const ratio = model.directional('electron', 2.5, lShell, 1) / model.directional('electron', 0.7, lShell, 1);
      const index = -Math.log(ratio) / Math.log(2.5 / 0.7);
      expect(index).toBeGreaterThan(5);
      expect(index).toBeLessThan(7);
    }
  });
});
