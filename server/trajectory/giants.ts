import { PLANETS } from '../constants/planets.ts';
import { plainName } from '../ephemeris/index.ts';
import { shown } from './format.ts';
import { safeUtc } from './pieces.ts';
import type { TrajectoryNotice } from './types.ts';

/** A planet whose own belts a trajectory may cross on its way. */
interface GiantPlanet {
  readonly name: string;
  readonly naifId: number;
  readonly barycenterNaifId: number;
  readonly gmKm3S2: number;
  readonly equatorialRadiusKm: number;
}

/**
 * Radii: IAU WGCCRE (Archinal et al. 2018). GM of Jupiter and Saturn with satellites: DE440 (NAIF gm_de440.tpc), from
 * memory to six digits; they only set the step of a search.
 */
export const GIANT_PLANETS: readonly GiantPlanet[] = [
  { name: 'Jupiter', naifId: 599, barycenterNaifId: 5, gmKm3S2: 1.26713e8, equatorialRadiusKm: 71_492 },
  { name: 'Saturn', naifId: 699, barycenterNaifId: 6, gmKm3S2: 3.79406e7, equatorialRadiusKm: 60_268 },
  ...Object.values(PLANETS),
];

/** A pass closer than this is named: inside it the belts of every giant planet lie. */
const PASS_RADII = 15;

export function giantNamed(centerName: string): GiantPlanet | null {
  const plain = plainName(centerName);
  return (
    GIANT_PLANETS.find(({ name }) => plain === name.toUpperCase() || plain === `${name.toUpperCase()} BARYCENTER`) ??
    null
  );
}

/** The notice about a pass, or none when it is far. */
export function passNotice(giant: GiantPlanet, radiusKm: number, epochTdbS: number): TrajectoryNotice[] {
  const radii = radiusKm / giant.equatorialRadiusKm;
  if (!(radii < PASS_RADII)) return [];
  return [
    {
      code: 'otherGiantPlanet',
      severity: 'warning',
      text: `The file shows a pass at ${shown(radii, 3)} radii of ${giant.name} (${safeUtc(epochTdbS)}). The dose there is not part of any result here; add it as another source.`,
    },
  ];
}
