import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { decimalOfText } from '../../../server/ephemeris/decimal.ts';

describe('decimal numbers', () => {
  it('equal what the language reads, to the last bit', () => {
    // Source: ECMAScript Number(text), which rounds correctly.
    const digits = fc.stringMatching(/^[0-9]{1,22}$/);
    const exponent = fc.integer({ min: -330, max: 300 });
    fc.assert(
      fc.property(
        fc.constantFrom('', '-', '+'),
        digits,
        digits,
        exponent,
        fc.boolean(),
        (sign, whole, part, power, plain) => {
          const text = plain ? `${sign}${whole}.${part}` : `${sign}${whole}.${part}e${power}`;
          const expected = Number(text);
          const got = decimalOfText(text);
          if (Number.isFinite(expected)) expect(got).toBe(expected);
          else expect(got).toBeNaN();
        },
      ),
      { numRuns: 5000 },
    );
    fc.assert(
      fc.property(fc.double({ noNaN: true, noDefaultInfinity: true }), (value) => {
        expect(decimalOfText(String(value))).toBe(Number(String(value)));
        expect(decimalOfText(value.toExponential(12))).toBe(Number(value.toExponential(12)));
      }),
      { numRuns: 5000 },
    );
  });

  it.each([
    '',
    '-',
    '.',
    '+.',
    'e5',
    '1e',
    '1e+',
    '1.2.3',
    '1,5',
    '0x10',
    '1d5',
    'NaN',
    'Infinity',
    '1 2',
    '١',
    '1e99999',
    '1e400',
  ])('refuse "%s"', (text) => {
    expect(decimalOfText(text)).toBeNaN();
  });
});
