import { describe, expect, it } from 'vitest';
import { beltModel, defaultBeltModelId } from '../../../server/flux/index.ts';
import { PROTON_EDGES_MEV } from '../../../server/numeric/spectrumGrid.ts';

/** μ0 (T m/A, CODATA 2018) and the elementary charge, C. */
const MU0 = 1.25663706212e-6;
const CHARGE_C = 1.602176634e-19;
/** "Far above": electrons over protons at equal energy. */
const FAR = 100;
/** "Far below" the ion limit. */
const SHARE_OF_LIMIT = 0.1;

/**
 * Simple Kennel-Petschek level of the omnidirectional integral flux, cm⁻² s⁻¹:
 * (2/π) B_eq / (μ0 e L R) · (1 − x) ln(1/R) / (A − A_c), x = 0.25, ln(1/R) = 3, A − A_c = 0.2.
 */
function simpleLimit(equatorNt: number, lShell: number, radiusKm: number): number {
  const perM2S = ((2 / Math.PI) * equatorNt * 1e-9 * 0.75 * 3) / (MU0 * CHARGE_C * lShell * radiusKm * 1e3 * 0.2);
  return perM2S / 1e4;
}

describe('protons of the belts', () => {
  it.each([
    ['uranus', 4.73],
    ['uranus', 8],
    ['neptune', 7.4],
  ] as const)('are far outnumbered by electrons of equal energy at %s L %s', (planet, lShell) => {
    // Source: Krimigis et al. 1986, Science 233, 97 (second-hand); Stone et al. 1989, Science 246, 1489 (from memory).
    const model = beltModel(defaultBeltModelId(planet));
    for (const mev of [0.1, 0.5, 1]) {
      const electrons = model.directional('electron', mev, lShell, 1);
      expect(electrons / model.directional('proton', mev, lShell, 1), `${mev} MeV`).toBeGreaterThan(FAR);
    }
  });

  it.each([
    ['uranus', 4.73, 217, 25_559],
    ['neptune', 7.4, 35, 24_764],
  ] as const)('stay far below the ion limit at %s L %s', (planet, lShell, equatorNt, radiusKm) => {
    // Source: Mauk 2014, J. Geophys. Res. 119, 9729 (abstract: far below the ion limit). Measure: omnidirectional
    // proton flux above 30 keV over the simple Kennel-Petschek level in the form of Summers et al. 2009 (second-hand).
    // Beside it stands a rule of thumb (common practice, no source): trapped protons lie about a hundred times below
    // what had been predicted. The level of the model was set with that in mind, so this holds it and proves nothing new.
    const model = beltModel(defaultBeltModelId(planet));
    const edges = PROTON_EDGES_MEV.filter((energy) => energy >= 0.03);
    const flux = model.omnidirectionalInto('proton', lShell, 1, 1, 1e30, edges, new Float64Array(edges.length));
    let above = 0;
    for (let i = 1; i < edges.length; i++) above += 0.5 * (flux[i] + flux[i - 1]) * (edges[i] - edges[i - 1]);
    const share = above / simpleLimit(equatorNt, lShell, radiusKm);
    expect(share).toBeLessThan(SHARE_OF_LIMIT);
    expect(share).toBeGreaterThan(0);
  });

  it('take the limit that was worked out elsewhere', () => {
    // Source: evaluation of the same form beside the belt tables: 6.3e6 at Uranus L 4.73, 6.8e5 at Neptune L 7.4.
    expect(simpleLimit(217, 4.73, 25_559) / 6.3e6).toBeCloseTo(1, 1);
    expect(simpleLimit(35, 7.4, 24_764) / 6.8e5).toBeCloseTo(1, 1);
  });
});
