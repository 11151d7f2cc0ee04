/**
 * Interpolating polynomials through a window of nodes, in Newton's form with divided differences: Lagrange through
 * values, Hermite through values and first derivatives (each node twice). Fitted once per window, then evaluated by
 * Horner's rule without allocation.
 *
 * @source Stoer & Bulirsch (2002), Introduction to Numerical Analysis, 3rd ed., sections 2.1.3 and 2.1.5
 */
export class PolynomialWindow {
  private readonly components: number;
  private readonly knots: Float64Array;
  /** Shape (components, knots) by rows. */
  private readonly coefficients: Float64Array;
  private readonly capacity: number;
  private count = 0;
  private origin = 0;

  constructor(maxKnots: number, components: number) {
    this.capacity = maxKnots;
    this.components = components;
    this.knots = new Float64Array(maxKnots);
    this.coefficients = new Float64Array(maxKnots * components);
  }

  /** Polynomial of degree `nodeCount` − 1 through values at data[first + node × stride + component]. */
  fitLagrange(
    nodeCount: number,
    times: Float64Array,
    firstTime: number,
    data: Float64Array,
    first: number,
    stride: number,
  ): void {
    const { knots, coefficients, components, capacity } = this;
    this.count = nodeCount;
    this.origin = times[firstTime];
    for (let j = 0; j < nodeCount; j++) knots[j] = times[firstTime + j] - this.origin;
    for (let k = 0; k < components; k++) {
      const row = k * capacity;
      for (let j = 0; j < nodeCount; j++) coefficients[row + j] = data[first + j * stride + k];
    }
    this.reduce(1);
  }

  /**
   * Polynomial of degree 2 × `nodeCount` − 1 through values at data[first + node × stride + component] and derivatives
   * `derivativeShift` places behind them.
   */
  fitHermite(
    nodeCount: number,
    times: Float64Array,
    firstTime: number,
    data: Float64Array,
    first: number,
    stride: number,
    derivativeShift: number,
  ): void {
    const { knots, coefficients, components, capacity } = this;
    this.count = 2 * nodeCount;
    this.origin = times[firstTime];
    for (let j = 0; j < nodeCount; j++) {
      knots[2 * j] = times[firstTime + j] - this.origin;
      knots[2 * j + 1] = knots[2 * j];
    }
    for (let k = 0; k < components; k++) {
      const row = k * capacity;
      for (let j = 0; j < nodeCount; j++) {
        const at = first + j * stride + k;
        // First divided differences: the derivative inside a doubled node, the quotient between two nodes.
        coefficients[row + 2 * j] =
          j === 0 ? data[at] : (data[at] - data[at - stride]) / (knots[2 * j] - knots[2 * j - 2]);
        coefficients[row + 2 * j + 1] = data[at + derivativeShift];
      }
    }
    this.reduce(2);
  }

  /** Divided differences of order `from` and higher, in place; one division serves all components. */
  private reduce(from: number): void {
    const { knots, coefficients, components, capacity, count } = this;
    for (let order = from; order < count; order++) {
      for (let i = count - 1; i >= order; i--) {
        const inverse = 1 / (knots[i] - knots[i - order]);
        for (let at = i; at < components * capacity; at += capacity) {
          coefficients[at] = (coefficients[at] - coefficients[at - 1]) * inverse;
        }
      }
    }
  }

  /**
   * Values at a time and, where `derivativeOffset` ≥ 0, first derivatives.
   *
   * @param out - values from `offset`, derivatives from `derivativeOffset`; overwritten
   */
  evaluateInto(time: number, out: Float64Array, offset: number, derivativeOffset: number): void {
    const { knots, coefficients, components, capacity, count } = this;
    const t = time - this.origin;
    for (let k = 0; k < components; k++) {
      const row = k * capacity;
      let value = coefficients[row + count - 1];
      let slope = 0;
      for (let i = count - 2; i >= 0; i--) {
        const dt = t - knots[i];
        slope = slope * dt + value;
        value = value * dt + coefficients[row + i];
      }
      out[offset + k] = value;
      if (derivativeOffset >= 0) out[derivativeOffset + k] = slope;
    }
  }
}

/**
 * First node of a window of `size` nodes for an epoch between nodes `interval` and `interval` + 1: centred, for an odd
 * size on the nearer node, and slid inside the segment near its ends.
 */
export function windowStart(size: number, count: number, interval: number, nearerIsNext: boolean): number {
  const start = size % 2 === 0 ? interval - size / 2 + 1 : interval + (nearerIsNext ? 1 : 0) - (size - 1) / 2;
  return Math.max(0, Math.min(count - size, start));
}

/** Largest i with times[i] ≤ t, at most `count` − 2, at least 0; starts its search at `hint`. */
export function intervalOf(times: Float64Array, count: number, t: number, hint: number): number {
  const last = count - 2;
  if (hint <= last && hint >= 0 && times[hint] <= t) {
    if (hint === last || t < times[hint + 1]) return hint;
    if (hint + 1 === last || t < times[hint + 2]) return hint + 1;
  }
  let low = 0;
  let high = last + 1;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (times[middle] <= t) low = middle;
    else high = middle;
  }
  return Math.max(0, low);
}
