import type { InterpolationKind } from './nodes.ts';
import { intervalOf, PolynomialWindow, windowStart } from './polynomial.ts';

/**
 * States between the nodes of one segment, exactly as the segment asks: Hermite of degree n on (n + 1)/2 states,
 * Lagrange of degree n on n + 1 states (position and velocity each for itself), or straight lines.
 *
 * The window is centred on the epoch and slides inside the segment near its ends; with fewer nodes than the degree
 * needs, the degree drops. The polynomial of the last window is kept, so neighbouring epochs cost an evaluation only.
 */
export class NodeInterpolator {
  readonly epochsTdbS: Float64Array;
  readonly states: Float64Array;
  readonly hermite: boolean;
  /** States in a window. */
  readonly size: number;
  private readonly count: number;
  private readonly polynomial: PolynomialWindow;
  private interval = 0;
  private fittedStart = -1;

  /**
   * @param epochsTdbS - shape (n,), strictly ascending, n ≥ 2
   * @param states - shape (n, 6) by rows, km and km/s
   */
  constructor(epochsTdbS: Float64Array, states: Float64Array, kind: InterpolationKind, degree: number) {
    this.epochsTdbS = epochsTdbS;
    this.states = states;
    this.count = epochsTdbS.length;
    this.hermite = kind === 'hermite';
    const wanted = this.hermite ? (degree + 1) / 2 : degree + 1;
    this.size = Math.min(wanted, this.count);
    this.polynomial = this.hermite ? new PolynomialWindow(2 * this.size, 3) : new PolynomialWindow(this.size, 6);
  }

  /** Degree of the polynomial in use, lower than asked for where the nodes are too few. */
  get degree(): number {
    return this.hermite ? 2 * this.size - 1 : this.size - 1;
  }

  /** @param out - shape (6,): km and km/s in the axes of the nodes; overwritten */
  stateInto(epochTdbS: number, out: Float64Array): Float64Array {
    const { epochsTdbS, polynomial, size } = this;
    const interval = intervalOf(epochsTdbS, this.count, epochTdbS, this.interval);
    this.interval = interval;
    const nearerIsNext = epochTdbS - epochsTdbS[interval] > epochsTdbS[interval + 1] - epochTdbS;
    const start = windowStart(size, this.count, interval, nearerIsNext);
    if (start !== this.fittedStart) {
      if (this.hermite) polynomial.fitHermite(size, epochsTdbS, start, this.states, 6 * start, 6, 3);
      else polynomial.fitLagrange(size, epochsTdbS, start, this.states, 6 * start, 6);
      this.fittedStart = start;
    }
    polynomial.evaluateInto(epochTdbS, out, 0, this.hermite ? 3 : -1);
    return out;
  }
}
