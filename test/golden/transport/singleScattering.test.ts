import { describe, it } from 'vitest';
import { checkCase, isHeavy, NAMED } from './singleScattering.ts';

/** Source: single scattering, see singleScattering.ts; the long test runs all cases with more histories. */
const QUICK = /^(Al (0.314|0.521|1 MeV|10)|C|Cu 1|Si|Ta (0.5|5))/;
/** One standard error of the half-peak depth is then near 1 %, in tantalum 1.3 %. */
const HISTORIES = { light: 10_000, heavy: 25_000 };

describe('electron beams against single scattering', () => {
  it.each(NAMED.filter(([name]) => QUICK.test(name)))('%s', (_, golden) => {
    checkCase(golden, isHeavy(golden) ? HISTORIES.heavy : HISTORIES.light, 11, [0.5, 0.2]);
  });
});
