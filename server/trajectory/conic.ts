/** A conic about a planet: an open one has e > 1 and a negative semi-major axis. Angles in radians. */
export interface Conic {
  readonly gmKm3S2: number;
  readonly periapsisKm: number;
  readonly eccentricity: number;
}

/** Mean motion, rad/s, of an ellipse or hyperbola. */
export function meanMotionRadS(conic: Conic): number {
  const semiMajorKm = conic.periapsisKm / Math.abs(1 - conic.eccentricity);
  return Math.sqrt(conic.gmKm3S2 / semiMajorKm ** 3);
}

/**
 * Position and velocity in the plane of the conic at a time from periapsis.
 *
 * Kepler's equation by Newton inside a bracket; x towards periapsis, y along the motion there.
 *
 * @param out - shape (4,): x, y in km, their rates in km/s; overwritten
 * @source Danby (1988), Fundamentals of Celestial Mechanics, 2nd ed., sections 6.2 and 6.6
 */
export function planeStateInto(conic: Conic, sincePeriapsisS: number, out: Float64Array): Float64Array {
  const { eccentricity: e, periapsisKm } = conic;
  const meanRad = meanMotionRadS(conic) * sincePeriapsisS;
  const semiMajorKm = periapsisKm / Math.abs(1 - e);
  const speedScale = Math.sqrt(conic.gmKm3S2 / semiMajorKm);
  if (e < 1) {
    const anomaly = ellipticAnomaly(reduced(meanRad), e);
    const ratio = 1 - e * Math.cos(anomaly);
    const width = Math.sqrt(1 - e * e);
    out[0] = semiMajorKm * (Math.cos(anomaly) - e);
    out[1] = semiMajorKm * width * Math.sin(anomaly);
    out[2] = (-speedScale * Math.sin(anomaly)) / ratio;
    out[3] = (speedScale * width * Math.cos(anomaly)) / ratio;
    return out;
  }
  const anomaly = hyperbolicAnomaly(meanRad, e);
  const ratio = e * Math.cosh(anomaly) - 1;
  const width = Math.sqrt(e * e - 1);
  out[0] = semiMajorKm * (e - Math.cosh(anomaly));
  out[1] = semiMajorKm * width * Math.sinh(anomaly);
  out[2] = (-speedScale * Math.sinh(anomaly)) / ratio;
  out[3] = (speedScale * width * Math.cosh(anomaly)) / ratio;
  return out;
}

function reduced(angleRad: number): number {
  return angleRad - 2 * Math.PI * Math.round(angleRad / (2 * Math.PI));
}

function ellipticAnomaly(meanRad: number, e: number): number {
  return solve(
    (x) => x - e * Math.sin(x) - meanRad,
    (x) => 1 - e * Math.cos(x),
    meanRad - e,
    meanRad + e,
  );
}

function hyperbolicAnomaly(meanRad: number, e: number): number {
  // sinh x ≥ x bounds the root from above by asinh(M/(e−1)) and from below by asinh(M/e), in absolute value.
  const near = Math.asinh(meanRad / e);
  const far = Math.asinh(meanRad / (e - 1));
  return solve(
    (x) => e * Math.sinh(x) - x - meanRad,
    (x) => e * Math.cosh(x) - 1,
    Math.min(near, far),
    Math.max(near, far),
  );
}

/** Root of an ascending function inside [low, high]. */
function solve(f: (x: number) => number, slope: (x: number) => number, low: number, high: number): number {
  let x = 0.5 * (low + high);
  for (let i = 0; i < 100; i++) {
    const value = f(x);
    if (value > 0) high = x;
    else low = x;
    let next = x - value / slope(x);
    if (!(next > low && next < high)) next = 0.5 * (low + high);
    if (Math.abs(next - x) <= 2e-16 * Math.max(1, Math.abs(x))) return next;
    x = next;
  }
  return x;
}

/** Time from periapsis at which a conic reaches a radius outwards, s; NaN when it never does. */
export function timeToRadiusS(conic: Conic, radiusKm: number): number {
  const { eccentricity: e, periapsisKm } = conic;
  if (radiusKm < periapsisKm) return Number.NaN;
  const semiMajorKm = periapsisKm / Math.abs(1 - e);
  const n = meanMotionRadS(conic);
  if (e < 1) {
    const cosine = (1 - radiusKm / semiMajorKm) / e;
    if (cosine < -1) return Number.NaN;
    const anomaly = Math.acos(Math.min(1, cosine));
    return (anomaly - e * Math.sin(anomaly)) / n;
  }
  const anomaly = Math.acosh(Math.max(1, (1 + radiusKm / semiMajorKm) / e));
  return (e * Math.sinh(anomaly) - anomaly) / n;
}
