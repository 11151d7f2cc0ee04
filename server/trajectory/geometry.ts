import type { Planet } from '../constants/planets.ts';
import { bodyAxesInto, latitudeLongitudeDeg, type RotationModel, rotateInto } from '../frames/rotation.ts';

interface SurfacePoint {
  readonly latitudeDeg: number;
  readonly eastLongitudeDeg: number;
  readonly altitudeKm: number;
}

/**
 * Where a position lies over the planet: planetocentric latitude and east longitude in the body-fixed frame, and the
 * height above the 1-bar ellipsoid along the radius (it differs from the height along the normal by less than
 * altitude × flattening²).
 *
 * @param state - first three values are the position, km, ICRF axes, planet centre
 */
export function surfacePoint(
  planet: Planet,
  rotation: RotationModel,
  epochTdbS: number,
  state: Float64Array,
): SurfacePoint {
  const axes = bodyAxesInto(rotation, epochTdbS, 0, new Float64Array(9));
  const body = rotateInto(axes, state[0], state[1], state[2], new Float64Array(3));
  return {
    ...latitudeLongitudeDeg(body[0], body[1], body[2]),
    altitudeKm: Math.hypot(body[0], body[1], body[2]) - ellipsoidRadiusKm(planet, body),
  };
}

/** Distance from the centre to the 1-bar ellipsoid in the direction of a body-fixed vector, km. */
function ellipsoidRadiusKm(planet: Planet, body: Float64Array): number {
  const { equatorialRadiusKm: a, polarRadiusKm: b } = planet;
  const radius = Math.hypot(body[0], body[1], body[2]);
  if (radius === 0) return b;
  return radius / Math.sqrt((body[0] ** 2 + body[1] ** 2) / a ** 2 + body[2] ** 2 / b ** 2);
}

/** Speed at infinity or period of the two-body path through a state. */
export function osculating(gmKm3S2: number, state: Float64Array): { vInfKmS: number | null; periodS: number | null } {
  const radius = Math.hypot(state[0], state[1], state[2]);
  const energy = 0.5 * (state[3] ** 2 + state[4] ** 2 + state[5] ** 2) - gmKm3S2 / radius;
  if (energy >= 0) return { vInfKmS: Math.sqrt(2 * energy), periodS: null };
  const semiMajorKm = -gmKm3S2 / (2 * energy);
  return { vInfKmS: null, periodS: 2 * Math.PI * Math.sqrt(semiMajorKm ** 3 / gmKm3S2) };
}
