import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { lotCapability, predictivePoints, toleranceFactor, zeroFailureSampleSize } from '../../../server/margin/lot.ts';
import {
  betaI,
  gammaQ,
  lnGamma,
  noncentralTCdf,
  normalCdf,
  normalQuantile,
  studentTCdf,
  studentTQuantile,
} from '../../../server/numeric/distributions.ts';

// Source: fixtures/golden/lot-tolerance-factors/README.md (SciPy's exact noncentral t).
const rows = readFileSync(
  new URL('../../../fixtures/golden/lot-tolerance-factors/factors.csv', import.meta.url),
  'utf8',
)
  .trim()
  .split('\n')
  .slice(1)
  .map((line) => line.split(',').map(Number));
/** Half a unit of the last printed decimal, plus rounding of the table entry itself. */
const FACTOR_TOLERANCE = 0.5001e-4;

describe('one-sided tolerance factor', () => {
  it('reproduces every entry of the table to its four decimals', () => {
    expect(rows.length).toBe(285);
    for (const [n, confidence, probability, expected] of rows) {
      const got = toleranceFactor(n, confidence, probability);
      expect(Math.abs(got - expected), `n ${n} C ${confidence} P ${probability}: ${got}`).toBeLessThan(
        FACTOR_TOLERANCE,
      );
    }
  });

  it('gives the limit of the worked lot', () => {
    // Source: worked example in the fixture's README: 48, 55, 60, 66, 75 krad(Si).
    const lot = lotCapability([48, 55, 60, 66, 75]);
    expect(lot.geometricMeanKradSi).toBeCloseTo(60.1, 2);
    expect(lot.lnSd).toBeCloseTo(0.1705, 4);
    expect(lot.limitKradSi).toBeCloseTo(27.13, 2);
  });

  it('counts the devices of a test without failures', () => {
    // Source: 1 − P^n ≥ C solved by hand: 0.9^22 = 0.0985, 0.9^21 = 0.1094; 0.99^230 = 0.0991, 0.99^229 = 0.1001.
    expect(zeroFailureSampleSize(0.9, 0.9)).toBe(22);
    expect(zeroFailureSampleSize(0.9, 0.99)).toBe(230);
  });
});

describe('distributions', () => {
  it('meets tabulated values', () => {
    // Source: Abramowitz & Stegun tables 6.1, 26.1, 26.10; closed forms for 1 and 2 degrees of freedom.
    expect(lnGamma(0.5)).toBeCloseTo(0.5 * Math.log(Math.PI), 13);
    expect(lnGamma(1.5)).toBeCloseTo(Math.log(0.886226925452758), 13);
    expect(gammaQ(1, 2.5)).toBeCloseTo(Math.exp(-2.5), 14);
    expect(gammaQ(2, 9)).toBeCloseTo(10 * Math.exp(-9), 14);
    expect(normalCdf(1)).toBeCloseTo(0.841344746068543, 14);
    expect(normalCdf(-6) / 9.865876450377e-10).toBeCloseTo(1, 10);
    expect(normalQuantile(0.95)).toBeCloseTo(1.644853626951472, 13);
    expect(normalQuantile(0.001)).toBeCloseTo(-3.090232306167813, 12);
    expect(betaI(2, 3, 0.4)).toBeCloseTo(0.5248, 13);
    expect(studentTCdf(2, 1)).toBeCloseTo(0.5 + Math.atan(2) / Math.PI, 13);
    expect(studentTCdf(-1.5, 2)).toBeCloseTo(0.5 - 1.5 / (2 * Math.sqrt(2 + 2.25)), 13);
    expect(studentTQuantile(0.975, 4)).toBeCloseTo(2.776, 3);
    expect(studentTQuantile(0.95, 9)).toBeCloseTo(1.833, 3);
  });

  it('joins the central t at zero noncentrality', () => {
    for (const degrees of [1, 4, 30]) {
      expect(noncentralTCdf(1.3, degrees, 0)).toBeCloseTo(studentTCdf(1.3, degrees), 10);
    }
  });

  it('spreads the next device by s √(1 + 1/n) t', () => {
    const lot = lotCapability([48, 55, 60, 66, 75]);
    const points = predictivePoints(lot, 1000);
    // Source: A&S table 26.10, t(0.95, 4) = 2.132; the 95 % point falls between points 949 and 950.
    const expected = lot.geometricMeanKradSi * Math.exp(2.132 * lot.lnSd * Math.sqrt(1.2));
    expect(Math.sqrt(points[949] * points[950]) / expected).toBeCloseTo(1, 3);
    expect(Math.sqrt(points[499] * points[500]) / lot.geometricMeanKradSi).toBeCloseTo(1, 10);
  });
});
