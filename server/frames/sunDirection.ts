import type { PlanetId } from '../constants/planets.ts';
import { RADIAN_PER_DEG } from '../units.ts';

/** Mean Keplerian elements at J2000 and their rates per century: a au, e, i, L, ϖ, Ω in degrees, ecliptic of J2000. */
const ELEMENTS: Readonly<Record<PlanetId, readonly (readonly [number, number])[]>> = {
  uranus: [
    [19.18916464, -0.00196176],
    [0.04725744, -0.00004397],
    [0.77263783, -0.00242939],
    [313.23810451, 428.48202785],
    [170.9542763, 0.40805281],
    [74.01692503, 0.04240589],
  ],
  neptune: [
    [30.06992276, 0.00026291],
    [0.00859048, 0.00005105],
    [1.77004347, 0.00035372],
    [-55.12002969, 218.45945325],
    [44.96476227, -0.32241464],
    [131.78422574, -0.00508664],
  ],
};
const CENTURY_S = 36_525 * 86_400;
const OBLIQUITY = 23.43928 * RADIAN_PER_DEG;

/**
 * Direction from a planet to the Sun, unit vector, ICRF axes. For pictures: within 0.1° from 1900 to 2050.
 *
 * @source Standish & Williams, Approximate Positions of the Planets (JPL), elements for 1800-2050
 */
export function sunDirectionIcrf(planet: PlanetId, epochTdbS: number): [number, number, number] {
  const centuries = epochTdbS / CENTURY_S;
  const [, e, i, l, perihelion, node] = ELEMENTS[planet].map(([value, rate]) => value + rate * centuries);
  const mean = (l - perihelion) * RADIAN_PER_DEG;
  let eccentric = mean;
  for (let k = 0; k < 20; k++) {
    eccentric -= (eccentric - e * Math.sin(eccentric) - mean) / (1 - e * Math.cos(eccentric));
  }
  const x = Math.cos(eccentric) - e;
  const y = Math.sqrt(1 - e * e) * Math.sin(eccentric);
  const [w, o, t] = [(perihelion - node) * RADIAN_PER_DEG, node * RADIAN_PER_DEG, i * RADIAN_PER_DEG];
  const along = x * Math.cos(w) - y * Math.sin(w);
  const across = x * Math.sin(w) + y * Math.cos(w);
  const ecliptic = [
    along * Math.cos(o) - across * Math.cos(t) * Math.sin(o),
    along * Math.sin(o) + across * Math.cos(t) * Math.cos(o),
    across * Math.sin(t),
  ];
  const length = Math.hypot(...ecliptic);
  return [
    -ecliptic[0] / length,
    -(ecliptic[1] * Math.cos(OBLIQUITY) - ecliptic[2] * Math.sin(OBLIQUITY)) / length,
    -(ecliptic[1] * Math.sin(OBLIQUITY) + ecliptic[2] * Math.cos(OBLIQUITY)) / length,
  ];
}
