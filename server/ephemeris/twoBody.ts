/**
 * Two-body motion for any energy by universal variables.
 *
 * @source Danby (1988), Fundamentals of Celestial Mechanics, 2nd ed., sections 6.9 and 6.10
 */
const MAX_ITERATIONS = 60;

/** Stumpff's functions c0 … c3 of x into `out`, by series near zero and closed forms elsewhere. */
function stumpffInto(x: number, out: Float64Array): void {
  if (Math.abs(x) < 1e-2) {
    // Series of c2 and c3 to x⁶; the next term is below 1e-19 here.
    let c2 = 0;
    let c3 = 0;
    for (let k = 6; k >= 1; k--) {
      c2 = (1 - x * c2) / ((2 * k - 1) * (2 * k));
      c3 = (1 - x * c3) / (2 * k * (2 * k + 1));
    }
    out[2] = c2;
    out[3] = c3;
  } else if (x > 0) {
    const root = Math.sqrt(x);
    out[2] = (1 - Math.cos(root)) / x;
    out[3] = (root - Math.sin(root)) / (x * root);
  } else {
    const root = Math.sqrt(-x);
    out[2] = (1 - Math.cosh(root)) / x;
    out[3] = (Math.sinh(root) - root) / (-x * root);
  }
  out[0] = 1 - x * out[2];
  out[1] = 1 - x * out[3];
}

const c = new Float64Array(4);

/**
 * State after a time on the conic through a state.
 *
 * @param state - shape (≥ at + 6,), km and km/s; `at` is where its six numbers start
 * @param durationS - any sign
 * @param out - shape (6,), km and km/s; overwritten; must not alias `state`
 * @returns false when the iteration does not converge (states that are no orbit)
 */
export function propagateInto(
  gmKm3S2: number,
  state: Float64Array,
  at: number,
  durationS: number,
  out: Float64Array,
): boolean {
  const x = state[at];
  const y = state[at + 1];
  const z = state[at + 2];
  const vx = state[at + 3];
  const vy = state[at + 4];
  const vz = state[at + 5];
  const r0 = Math.sqrt(x * x + y * y + z * z);
  const u = x * vx + y * vy + z * vz;
  const alpha = (2 * gmKm3S2) / r0 - (vx * vx + vy * vy + vz * vz);
  if (alpha > 0) {
    // Whole revolutions change nothing and would only hurt convergence.
    const period = (2 * Math.PI * gmKm3S2) / alpha ** 1.5;
    durationS -= period * Math.round(durationS / period);
  }
  // Kepler's equation t(s) rises monotonically (dt/ds = r > 0): Newton inside a bracket that grows until it holds the root.
  // On hyperbolas t grows like sinh, so the bracket starts within one scale length and doubles from there.
  const scale = Math.min(Math.abs(durationS) / r0, 1 / Math.sqrt(Math.abs(alpha)));
  let low = durationS < 0 ? -scale : 0;
  let high = durationS < 0 ? 0 : scale;
  const time = (value: number): number => {
    stumpffInto(alpha * value * value, c);
    return value * (r0 * c[1] + value * (u * c[2] + value * gmKm3S2 * c[3]));
  };
  for (let i = 0; i < MAX_ITERATIONS && time(high) < durationS; i++) high = 2 * high + 1e-12;
  for (let i = 0; i < MAX_ITERATIONS && time(low) > durationS; i++) low = 2 * low - 1e-12;
  let s = 0.5 * (low + high);
  let converged = false;
  for (let i = 0; i < 4 * MAX_ITERATIONS; i++) {
    const error = time(s) - durationS;
    if (error > 0) high = s;
    else low = s;
    const slope = r0 * c[0] + s * (u * c[1] + s * gmKm3S2 * c[2]);
    let next = s - error / slope;
    if (!(next > low && next < high)) next = 0.5 * (low + high);
    if (next === s || Math.abs(next - s) <= 1e-15 * Math.abs(next) || high - low <= 1e-15 * Math.abs(high)) {
      s = next;
      converged = true;
      break;
    }
    s = next;
  }
  stumpffInto(alpha * s * s, c);
  const s2 = s * s;
  const r = r0 * c[0] + s * (u * c[1] + s * gmKm3S2 * c[2]);
  const f = 1 - (gmKm3S2 / r0) * s2 * c[2];
  const g = durationS - gmKm3S2 * s2 * s * c[3];
  const fDot = (-gmKm3S2 / (r * r0)) * s * c[1];
  const gDot = 1 - (gmKm3S2 / r) * s2 * c[2];
  out[0] = f * x + g * vx;
  out[1] = f * y + g * vy;
  out[2] = f * z + g * vz;
  out[3] = fDot * x + gDot * vx;
  out[4] = fDot * y + gDot * vy;
  out[5] = fDot * z + gDot * vz;
  return converged && Number.isFinite(out[0]) && Number.isFinite(out[3]);
}
