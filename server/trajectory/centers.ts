import { PLANETS, type PlanetId } from '../constants/planets.ts';
import { plainName } from '../ephemeris/index.ts';
import { AppError } from '../errors.ts';

interface Center {
  readonly planet: PlanetId;
  readonly barycenter: boolean;
}

/** The planet a centre name stands for, by name or NAIF code; null for any other centre. */
export function centerOf(name: string): Center | null {
  const plain = plainName(name);
  for (const planet of Object.values(PLANETS)) {
    const upper = planet.name.toUpperCase();
    if (plain === upper || plain === String(planet.naifId)) return { planet: planet.id, barycenter: false };
    if (
      plain === `${upper} BARYCENTER` ||
      plain === `${upper} SYSTEM BARYCENTER` ||
      plain === String(planet.barycenterNaifId)
    ) {
      return { planet: planet.id, barycenter: true };
    }
  }
  return null;
}

/** @throws {AppError} CENTER_REFUSED naming the line */
export function refuseCenter(name: string, line: number | undefined): never {
  const plain = plainName(name);
  const solar =
    plain === 'SUN' || plain === 'SOLAR SYSTEM BARYCENTER' || plain === 'SSB' || plain === '0' || plain === '10';
  const reason = solar
    ? 'the planet itself is not in the file; export the states relative to Uranus or Neptune'
    : 'the states must be relative to Uranus, Neptune or one of their barycentres';
  throw new AppError(
    'CENTER_REFUSED',
    `${line === undefined ? '' : `Line ${line}: `}the centre is "${name}"; ${reason}.`,
    [{ ...(line === undefined ? {} : { line }), field: 'CENTER_NAME', detail: reason, got: name }],
  );
}

/** @throws {AppError} PLANET_NEEDED when the request names another planet than the file */
export function requireSamePlanet(requested: PlanetId | undefined, found: PlanetId): void {
  if (requested === undefined || requested === found) return;
  const detail = `the file is about ${PLANETS[found].name}, the request names ${PLANETS[requested].name}`;
  throw new AppError('PLANET_NEEDED', `The planet does not agree: ${detail}.`, [
    { pointer: '#/planet', field: 'planet', detail, got: requested, limit: found },
  ]);
}
