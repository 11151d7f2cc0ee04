import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { NodeInterpolator } from '../../../server/ephemeris/index.ts';

const coefficients = fc.array(fc.double({ min: -5, max: 5, noNaN: true }), { minLength: 8, maxLength: 8 });
const gaps = fc.array(fc.double({ min: 0.3, max: 2, noNaN: true }), { minLength: 4, maxLength: 14 });

/** Value and slope of Σ c_k ((t − 4)/4)^k, so that terms stay of order one. */
function polynomial(c: readonly number[], degree: number, t: number): [number, number] {
  const s = (t - 4) / 4;
  let value = 0;
  let slope = 0;
  for (let k = degree; k >= 0; k--) {
    slope = slope * s + value;
    value = value * s + c[k];
  }
  return [value, slope / 4];
}

function nodes(c: readonly number[], degree: number, spacing: readonly number[]): [Float64Array, Float64Array] {
  const epochs = [0];
  for (const gap of spacing) epochs.push(epochs[epochs.length - 1] + gap);
  const states = epochs.flatMap((t) => {
    const [value, slope] = polynomial(c, degree, t);
    return [value, 2 * value, -value, slope, 2 * slope, -slope];
  });
  return [Float64Array.from(epochs), Float64Array.from(states)];
}

/** Roundings of divided differences over uneven nodes, whose values reach 5 × 8 × 7⁷ at the far end of the span. */
const ROUNDING_REL = 1e-9;

describe('interpolation between nodes', () => {
  for (const [kind, degree] of [
    ['hermite', 7],
    ['hermite', 3],
    ['lagrange', 4],
    ['lagrange', 3],
    ['linear', 1],
  ] as const) {
    it(`${kind} of degree ${degree} gives polynomials of that degree back`, () => {
      fc.assert(
        fc.property(coefficients, gaps, fc.double({ min: 0, max: 1, noNaN: true }), (c, spacing, share) => {
          const [epochs, states] = nodes(c, degree, spacing);
          const interpolator = new NodeInterpolator(epochs, states, kind, degree);
          // With fewer nodes than the degree needs it drops, and then only lower polynomials come back.
          if (interpolator.degree < degree) return;
          const t = share * epochs[epochs.length - 1];
          const [value, slope] = polynomial(c, degree, t);
          const out = interpolator.stateInto(t, new Float64Array(6));
          const scale = Math.max(1, ...states.map(Math.abs));
          expect(Math.abs(out[0] - value)).toBeLessThan(ROUNDING_REL * scale);
          expect(Math.abs(out[1] - 2 * value)).toBeLessThan(2 * ROUNDING_REL * scale);
          if (kind === 'hermite') expect(Math.abs(out[3] - slope)).toBeLessThan(ROUNDING_REL * scale);
        }),
        { numRuns: 300 },
      );
    });
  }

  it('meets every node exactly enough, whatever the order of the epochs', () => {
    fc.assert(
      fc.property(coefficients, gaps, (c, spacing) => {
        const [epochs, states] = nodes(c, 7, spacing);
        const interpolator = new NodeInterpolator(epochs, states, 'hermite', 7);
        const out = new Float64Array(6);
        for (const i of epochs.keys()) {
          const node = (i * 5) % epochs.length;
          interpolator.stateInto(epochs[node], out);
          expect(Math.abs(out[0] - states[6 * node])).toBeLessThan(ROUNDING_REL * Math.max(1, ...states.map(Math.abs)));
        }
      }),
      { numRuns: 200 },
    );
  });

  it('draws a straight line between two states', () => {
    const interpolator = new NodeInterpolator(
      Float64Array.of(0, 10),
      Float64Array.of(0, 0, 0, 1, 2, 3, 10, 20, 30, 3, 2, 1),
      'linear',
      1,
    );
    expect([...interpolator.stateInto(2.5, new Float64Array(6))]).toEqual([2.5, 5, 7.5, 1.5, 2, 2.5]);
  });
});
