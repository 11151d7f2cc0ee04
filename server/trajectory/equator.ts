import { type RotationModel, spinPoleIcrf } from '../frames/rotation.ts';

/**
 * Axes of the planet's equator, not turning with it, as rows in ICRF axes: x to the ascending node of the equator on
 * the ICRF equator, z along the spin pole (the angular momentum, so prograde orbits have inclinations below 90°).
 *
 * @returns shape (9,), row-major
 */
export function equatorAxes(rotation: RotationModel, epochTdbS: number): Float64Array {
  const pole = spinPoleIcrf(rotation, epochTdbS);
  const sine = Math.hypot(pole[0], pole[1]);
  const x = [-pole[1] / sine, pole[0] / sine, 0];
  const y = [pole[1] * x[2] - pole[2] * x[1], pole[2] * x[0] - pole[0] * x[2], pole[0] * x[1] - pole[1] * x[0]];
  return Float64Array.of(...x, ...y, pole[0], pole[1], pole[2]);
}

/**
 * In-plane state to ICRF axes by node, inclination and argument of periapsis on the planet's equator.
 *
 * @param plane - shape (4,): x, y, and their rates
 * @param out - shape (6,), km and km/s; overwritten
 */
export function orientInto(
  axes: Float64Array,
  nodeRad: number,
  inclinationRad: number,
  argumentRad: number,
  plane: Float64Array,
  out: Float64Array,
): Float64Array {
  const cosN = Math.cos(nodeRad);
  const sinN = Math.sin(nodeRad);
  const cosI = Math.cos(inclinationRad);
  const sinI = Math.sin(inclinationRad);
  const cosW = Math.cos(argumentRad);
  const sinW = Math.sin(argumentRad);
  // P towards periapsis, Q along the motion there, in equator axes.
  const p0 = cosN * cosW - sinN * sinW * cosI;
  const p1 = sinN * cosW + cosN * sinW * cosI;
  const p2 = sinW * sinI;
  const q0 = -cosN * sinW - sinN * cosW * cosI;
  const q1 = -sinN * sinW + cosN * cosW * cosI;
  const q2 = cosW * sinI;
  for (let half = 0; half < 2; half++) {
    const a = plane[2 * half];
    const b = plane[2 * half + 1];
    const e0 = a * p0 + b * q0;
    const e1 = a * p1 + b * q1;
    const e2 = a * p2 + b * q2;
    for (let i = 0; i < 3; i++) out[3 * half + i] = axes[i] * e0 + axes[3 + i] * e1 + axes[6 + i] * e2;
  }
  return out;
}
