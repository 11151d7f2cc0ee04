import type { PlanetId } from '../constants/planets.ts';
import { binIntegralsInto, ELECTRON_EDGES_MEV } from '../numeric/spectrumGrid.ts';
import { neptuneBelts } from './neptune.ts';
import type { BeltModel } from './types.ts';
import { uranusBelts } from './uranus.ts';

/** The measure: equatorial 90° electron intensity above this energy, cm⁻² s⁻¹ sr⁻¹. */
const KP_THRESHOLD_MEV = 0.1;

/**
 * L of the anchor spectra and the greatest ratio of the measured spectrum to the differential Kennel-Petschek limit
 * there. Source: Mauk & Fox 2010, JGR 115 A12220 (second-hand).
 */
const ANCHORS: Readonly<Record<PlanetId, { readonly lShell: number; readonly ratio: number }>> = {
  uranus: { lShell: 4.73, ratio: 1.11 },
  neptune: { lShell: 7.4, ratio: 0.91 },
};

/** How the share of draws above the level is to be read; goes with every number made from it. */
export const KP_MEASURE =
  'Equatorial 90° electron intensity above 0.1 MeV against the Kennel-Petschek level of the anchor spectrum (median ' +
  'anchor intensity divided by its published peak ratio to the limit, Mauk & Fox 2010, second-hand: 1.11 at Uranus ' +
  'L 4.73, 0.91 at Neptune L 7.4) times (L / L of the anchor)^-4. A draw counts when any L bin it meets lies above. ' +
  'Nothing is capped.';

/** Equatorial 90° electron intensity above KP_THRESHOLD_MEV, cm⁻² s⁻¹ sr⁻¹; power laws within the bins of the grid. */
function electronIntensityAbove(belts: BeltModel, lShell: number): number {
  const edges = ELECTRON_EDGES_MEV.filter((energy) => energy >= KP_THRESHOLD_MEV * (1 - 1e-9));
  const values = edges.map((energy) => belts.directional('electron', energy, lShell, 1));
  return binIntegralsInto(edges, values, new Float64Array(edges.length - 1)).reduce((sum, part) => sum + part, 0);
}

/**
 * Median electrons over the Kennel-Petschek level scaled from the anchor, by the measure KP_THRESHOLD_MEV. The level
 * falls with B_eq/L, L⁻⁴ in a dipole (Kennel & Petschek 1966).
 */
export function kennelPetschekRatio(belts: BeltModel, planet: PlanetId, lShell: number): number {
  const { lShell: anchorL, ratio } = ANCHORS[planet];
  const anchored = planet === 'uranus' ? uranusBelts() : neptuneBelts();
  const level = (electronIntensityAbove(anchored, anchorL) / ratio) * (lShell / anchorL) ** -4;
  return electronIntensityAbove(belts, lShell) / level;
}
