/**
 * The two planets: gravity, shape, satellites. One source per number, in `sources`.
 * Radii are those of the 1-bar level; field models carry reference radii of their own, which differ.
 */
export type PlanetId = 'uranus' | 'neptune';

export interface Satellite {
  readonly name: string;
  readonly orbitRadiusKm: number;
}

export interface Planet {
  readonly id: PlanetId;
  readonly name: string;
  /** NAIF integer code of the planet's centre, and of the barycentre of its system. */
  readonly naifId: number;
  readonly barycenterNaifId: number;
  readonly gmKm3S2: number;
  readonly systemGmKm3S2: number;
  readonly equatorialRadiusKm: number;
  readonly polarRadiusKm: number;
  /** Zonal harmonics, dimensionless, about `gravityRadiusKm`. */
  readonly j2: number;
  readonly j4: number;
  readonly gravityRadiusKm: number;
  /** Largest distance between the planet's centre and the barycentre of its system, km. */
  readonly barycenterOffsetKm: number;
  readonly satellites: readonly Satellite[];
  readonly sources: Readonly<Record<'gm' | 'radii' | 'gravity' | 'satellites', string>>;
}

const GM_SOURCE = 'JPL DE440 constants as distributed in the NAIF kernel gm_de440.tpc (planet and system)';
const RADII_SOURCE = 'IAU Working Group on Cartographic Coordinates (Archinal et al. 2018), NAIF kernel pck00011.tpc';

export const PLANETS: Readonly<Record<PlanetId, Planet>> = {
  uranus: {
    id: 'uranus',
    name: 'Uranus',
    naifId: 799,
    barycenterNaifId: 7,
    gmKm3S2: 5793951.256527211,
    systemGmKm3S2: 5794556.4,
    equatorialRadiusKm: 25559,
    polarRadiusKm: 24973,
    j2: 3.51068e-3,
    j4: -3.417e-5,
    gravityRadiusKm: 25559,
    barycenterOffsetKm: 44,
    satellites: [
      { name: 'Puck', orbitRadiusKm: 86_004 },
      { name: 'Miranda', orbitRadiusKm: 129_800 },
      { name: 'Ariel', orbitRadiusKm: 191_200 },
      { name: 'Umbriel', orbitRadiusKm: 266_000 },
      { name: 'Titania', orbitRadiusKm: 435_800 },
      { name: 'Oberon', orbitRadiusKm: 583_600 },
    ],
    sources: {
      gm: GM_SOURCE,
      radii: RADII_SOURCE,
      gravity: 'Jacobson (2014), Astron. J. 148, 76: J2 (3510.68 ± 0.70)e-6, J4 (-34.17 ± 1.30)e-6 about 25559 km',
      satellites: 'PDS Ring-Moon Systems Node, table of Uranian satellites',
    },
  },
  neptune: {
    id: 'neptune',
    name: 'Neptune',
    naifId: 899,
    barycenterNaifId: 8,
    gmKm3S2: 6835103.145462294,
    systemGmKm3S2: 6836527.10058,
    equatorialRadiusKm: 24764,
    polarRadiusKm: 24341,
    j2: 3.40843e-3,
    j4: -3.34e-5,
    gravityRadiusKm: 25225,
    barycenterOffsetKm: 74,
    satellites: [
      { name: 'Despina', orbitRadiusKm: 52_526 },
      { name: 'Galatea', orbitRadiusKm: 61_953 },
      { name: 'Larissa', orbitRadiusKm: 73_548 },
      { name: 'Proteus', orbitRadiusKm: 117_647 },
      { name: 'Triton', orbitRadiusKm: 354_759 },
    ],
    sources: {
      gm: GM_SOURCE,
      radii: RADII_SOURCE,
      gravity: 'Jacobson (2009), Astron. J. 137, 4322: J2 (3408.43 ± 4.50)e-6; J4 and radius 25225 km from memory',
      satellites: 'NSSDC satellite fact sheet (Despina); the others from memory',
    },
  },
};
