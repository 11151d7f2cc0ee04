import { gaussLegendre } from '../numeric/gaussLegendre.ts';

/**
 * McIlwain's L from the invariants: the dipole shell that has the same I at the same mirror field.
 *
 * With mirror latitude λ in the dipole: B_m L³/M = sqrt(4 − 3cos²λ)/cos⁶λ and
 * I/L = 2 ∫₀^λ sqrt(1 − B/B_m) cos x sqrt(4 − 3cos²x) dx. The left-hand sides give X = I³ B_m/M as a function of λ
 * alone; it is inverted by Newton's method, exactly but for quadrature (relative error below 1e-10 for λ ≤ 85°).
 *
 * @source McIlwain (1961), J. Geophys. Res. 66, 3681; Hilton (1971), J. Geophys. Res. 76, 6952 (the fit)
 */
const NODES = gaussLegendre(40);
const TABLE_SIZE = 400;
const LATITUDE_MAX = (85 / 180) * Math.PI;
const TABLE_LATITUDE = new Float64Array(TABLE_SIZE + 1);
const TABLE_CUBE_ROOT_X = new Float64Array(TABLE_SIZE + 1);
for (let i = 0; i <= TABLE_SIZE; i++) {
  TABLE_LATITUDE[i] = (LATITUDE_MAX * i) / TABLE_SIZE;
  TABLE_CUBE_ROOT_X[i] = cubeRootX(TABLE_LATITUDE[i]);
}

/** Mirror field over equatorial field in a dipole at magnetic latitude λ (radian): sqrt(4 − 3cos²λ)/cos⁶λ. */
export function dipoleFieldRatio(latitudeRadian: number): number {
  const c2 = Math.cos(latitudeRadian) ** 2;
  return Math.sqrt(4 - 3 * c2) / (c2 * c2 * c2);
}

/** I/L of a particle that mirrors at magnetic latitude λ (radian) in a centred dipole, dimensionless. */
export function dipoleInvariantOverL(latitudeRadian: number): number {
  const mirror = dipoleFieldRatio(latitudeRadian);
  let sum = 0;
  // x = λ sin u takes the square-root end into a smooth one.
  for (let i = 0; i < NODES.x.length; i++) {
    const u = (Math.PI / 4) * (1 + NODES.x[i]);
    const x = latitudeRadian * Math.sin(u);
    const c = Math.cos(x);
    const inside = 1 - dipoleFieldRatio(x) / mirror;
    if (inside > 0) sum += NODES.w[i] * Math.sqrt(inside) * c * Math.sqrt(4 - 3 * c * c) * Math.cos(u);
  }
  return 2 * latitudeRadian * (Math.PI / 4) * sum;
}

/** X^(1/3) as a function of mirror latitude. */
function cubeRootX(latitudeRadian: number): number {
  return dipoleInvariantOverL(latitudeRadian) * Math.cbrt(dipoleFieldRatio(latitudeRadian));
}

/**
 * @param invariantI - reference radii, ≥ 0
 * @param mirrorNt - nT
 * @param momentNt - M, nT a³
 * @returns L in reference radii; NaN beyond a mirror latitude of 85°
 */
export function mcIlwainL(invariantI: number, mirrorNt: number, momentNt: number): number {
  const target = invariantI * Math.cbrt(mirrorNt / momentNt);
  let low = 0;
  let high = TABLE_SIZE;
  if (!(target <= TABLE_CUBE_ROOT_X[high])) return Number.NaN;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (TABLE_CUBE_ROOT_X[middle] <= target) low = middle;
    else high = middle;
  }
  const span = TABLE_CUBE_ROOT_X[high] - TABLE_CUBE_ROOT_X[low];
  let latitude =
    TABLE_LATITUDE[low] + ((target - TABLE_CUBE_ROOT_X[low]) / span) * (TABLE_LATITUDE[high] - TABLE_LATITUDE[low]);
  // Secant steps from the linear interpolate, bounded by the table's cell.
  let previous = TABLE_LATITUDE[low];
  let previousValue = TABLE_CUBE_ROOT_X[low] - target;
  for (let step = 0; step < 6; step++) {
    const value = cubeRootX(latitude) - target;
    if (value === previousValue) break;
    const next = latitude - (value * (latitude - previous)) / (value - previousValue);
    previous = latitude;
    previousValue = value;
    if (!Number.isFinite(next) || Math.abs(next - latitude) < 1e-13) break;
    latitude = next;
  }
  return Math.cbrt((momentNt / mirrorNt) * dipoleFieldRatio(latitude));
}

/** Hilton's (1971) fit to the same relation, accurate to about 0.01 %: a cross-check, not used for results. */
export function hiltonL(invariantI: number, mirrorNt: number, momentNt: number): number {
  const x = (invariantI ** 3 * mirrorNt) / momentNt;
  const root = Math.cbrt(x);
  return Math.cbrt((momentNt / mirrorNt) * (1 + 1.35047 * root + 0.46538 * root * root + 0.0475455 * x));
}
