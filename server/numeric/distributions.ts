/**
 * The few probability distributions that margins need, in double precision.
 *
 * @source Abramowitz & Stegun, Handbook of Mathematical Functions (1964): 6.1.41 (ln Γ), 6.5.29 and 6.5.31 (incomplete
 *   gamma), 26.2.23 (first guess of the normal quantile), 26.5.8 (incomplete beta), 26.7.1 (Student's t).
 */
const TINY = 1e-300;
const EPS = 1e-16;

/** ln Γ(x) for x > 0: Stirling's series (A&S 6.1.41) after the recurrence has lifted x above 10. Relative error < 1e-14. */
export function lnGamma(x: number): number {
  let shift = 0;
  while (x < 10) {
    shift += Math.log(x);
    x += 1;
  }
  const r = 1 / (x * x);
  const series = (1 / 12 - r * (1 / 360 - r * (1 / 1260 - r * (1 / 1680 - r / 1188)))) / x;
  return (x - 0.5) * Math.log(x) - x + 0.5 * Math.log(2 * Math.PI) + series - shift;
}

/** Regularised upper incomplete gamma function Q(a, x), a > 0, x ≥ 0: series below a + 1, continued fraction above. */
export function gammaQ(a: number, x: number): number {
  if (x <= 0) return 1;
  const front = Math.exp(a * Math.log(x) - x - lnGamma(a));
  if (x < a + 1) {
    let term = 1 / a;
    let sum = term;
    for (let n = 1; n < 10_000 && term > sum * EPS; n++) {
      term *= x / (a + n);
      sum += term;
    }
    return 1 - front * sum;
  }
  return front * continuedFraction((n) => [-n * (n - a), x + 1 + 2 * n - a], x + 1 - a);
}

/** Standard normal distribution function Φ(x); both tails keep their relative precision. */
export function normalCdf(x: number): number {
  const tail = 0.5 * gammaQ(0.5, 0.5 * x * x);
  return x > 0 ? 1 - tail : tail;
}

/** Standard normal quantile: A&S 26.2.23 polished by Newton steps to double precision. */
export function normalQuantile(p: number): number {
  if (!(p > 0 && p < 1)) throw new TypeError(`normalQuantile needs 0 < p < 1, got ${p}`);
  const upper = p > 0.5;
  const tail = upper ? 1 - p : p;
  const t = Math.sqrt(-2 * Math.log(tail));
  let x = t - (2.515517 + t * (0.802853 + t * 0.010328)) / (1 + t * (1.432788 + t * (0.189269 + t * 0.001308)));
  for (let step = 0; step < 4; step++) {
    const density = Math.exp(-0.5 * x * x) / Math.sqrt(2 * Math.PI);
    x += (normalCdf(-x) - tail) / density;
  }
  return upper ? x : -x;
}

/** Regularised incomplete beta function I_x(a, b). */
export function betaI(a: number, b: number, x: number): number {
  if (x <= 0) return 0;
  if (x >= 1) return 1;
  if (x > (a + 1) / (a + b + 2)) return 1 - betaI(b, a, 1 - x);
  const front = Math.exp(a * Math.log(x) + b * Math.log1p(-x) + lnGamma(a + b) - lnGamma(a) - lnGamma(b)) / a;
  const fraction = continuedFraction((n) => {
    const m = n >> 1;
    const even = (m * (b - m) * x) / ((a + 2 * m - 1) * (a + 2 * m));
    const odd = (-(a + m) * (a + b + m) * x) / ((a + 2 * m) * (a + 2 * m + 1));
    return [n % 2 === 0 ? even : odd, 1];
  }, 1);
  return front * fraction;
}

/** Distribution function of Student's t with `degrees` > 0 degrees of freedom. */
export function studentTCdf(t: number, degrees: number): number {
  const tail = 0.5 * betaI(degrees / 2, 0.5, degrees / (degrees + t * t));
  return t > 0 ? 1 - tail : tail;
}

/** Quantile of Student's t by bisection in asinh t, which resolves heavy tails and the centre alike. */
export function studentTQuantile(p: number, degrees: number): number {
  if (!(p > 0 && p < 1)) throw new TypeError(`studentTQuantile needs 0 < p < 1, got ${p}`);
  return Math.sinh(bisect((u) => studentTCdf(Math.sinh(u), degrees) - p, -80, 80));
}

/**
 * Distribution function of the noncentral t, P(T ≤ t), for t > 0.
 *
 * T = (Z + δ) / √(χ²/ν), so P(T ≤ t) = Φ(−δ) + ∫_{−δ}^∞ φ(z) Q(ν/2, ν((z + δ)/t)²/2) dz, by Gauss–Legendre panels:
 * the integrand is smooth on that range for every ν ≥ 1. Absolute error < 1e-9 for |δ| ≤ 80.
 */
export function noncentralTCdf(t: number, degrees: number, delta: number): number {
  if (!(t > 0)) throw new TypeError(`noncentralTCdf is written for t > 0, got ${t}`);
  const low = Math.max(-delta, -NORMAL_REACH);
  // Below the reach the normal density is nil; where −δ lies below it, Q is 1 only left of −δ, which has no mass.
  let sum = normalCdf(-delta);
  if (low >= NORMAL_REACH) return sum;
  const panels = 48;
  const width = (NORMAL_REACH - low) / panels;
  for (let panel = 0; panel < panels; panel++) {
    const middle = low + (panel + 0.5) * width;
    for (let k = 0; k < GAUSS_X.length; k++) {
      const z = middle + 0.5 * width * GAUSS_X[k];
      const ratio = (z + delta) / t;
      const density = Math.exp(-0.5 * z * z) / Math.sqrt(2 * Math.PI);
      sum += 0.5 * width * GAUSS_W[k] * density * gammaQ(degrees / 2, 0.5 * degrees * ratio * ratio);
    }
  }
  return sum;
}

/** Root of an increasing function on [low, high] by bisection to the last bit. */
export function bisect(f: (x: number) => number, low: number, high: number): number {
  for (let step = 0; step < 200; step++) {
    const middle = 0.5 * (low + high);
    if (middle === low || middle === high) break;
    if (f(middle) < 0) low = middle;
    else high = middle;
  }
  return 0.5 * (low + high);
}

const NORMAL_REACH = 9;
/** Gauss–Legendre nodes and weights, 8 points (A&S table 25.4). */
const GAUSS_X = [
  -0.960289856497536, -0.796666477413627, -0.525532409916329, -0.18343464249565, 0.18343464249565, 0.525532409916329,
  0.796666477413627, 0.960289856497536,
];
const GAUSS_W = [
  0.101228536290376, 0.222381034453374, 0.313706645877887, 0.362683783378362, 0.362683783378362, 0.313706645877887,
  0.222381034453374, 0.101228536290376,
];

/** 1 / (b₀ + a₁/(b₁ + a₂/(b₂ + …))) by the modified Lentz method; `terms(n)` gives [aₙ, bₙ] for n ≥ 1. */
function continuedFraction(terms: (n: number) => readonly [number, number], b0: number): number {
  let f = Math.abs(b0) < TINY ? TINY : b0;
  let c = f;
  let d = 0;
  for (let n = 1; n < 10_000; n++) {
    const [a, b] = terms(n);
    d = b + a * d;
    if (Math.abs(d) < TINY) d = TINY;
    c = b + a / c;
    if (Math.abs(c) < TINY) c = TINY;
    d = 1 / d;
    const change = c * d;
    f *= change;
    if (Math.abs(change - 1) < EPS * 4) break;
  }
  return 1 / f;
}
