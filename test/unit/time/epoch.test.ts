import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { dateOf, dayNumber } from '../../../server/time/calendar.ts';
import { formatEpoch, formatUtc, parseEpoch, TIME_SCALES } from '../../../server/time/index.ts';

describe('parseEpoch', () => {
  it('reads both forms of the same instant, with and without Z', () => {
    const calendar = parseEpoch('2045-06-01T12:30:15.25', 'TDB');
    expect(parseEpoch('2045-152T12:30:15.250Z', 'TDB')).toBe(calendar);
    expect(calendar).toBe(dayNumber(2045, 6, 1) * 86_400 - 43_200 + 12 * 3600 + 30 * 60 + 15.25);
  });

  it.each([
    '2045-06-01 12:30:15',
    '2045-06-01',
    '2045-6-01T12:30:15',
    '2045-06-31T12:30:15',
    '2045-02-29T00:00:00',
    '2045-366T00:00:00',
    '2045-000T00:00:00',
    '2045-06-01T24:00:00',
    '2045-06-01T12:60:00',
    '2045-06-01T12:30:15.',
    '2045-06-01T12:30:15+01:00',
    '2045-06-01T12:30:15ZZ',
    '2045-06-01T12:30:60',
    '',
    'T',
  ])('refuses "%s"', (text) => {
    expect(() => parseEpoch(text, 'UTC')).toThrow(expect.objectContaining({ code: 'EPOCH_UNREADABLE' }));
  });

  it('refuses a leap second that the list does not hold, and any outside UTC', () => {
    expect(() => parseEpoch('2015-12-31T23:59:60', 'UTC')).toThrow(/second of 60/);
    expect(() => parseEpoch('2016-12-31T23:59:60', 'TDB')).toThrow(/second of 60/);
  });

  it('refuses UTC before 1972 and says why', () => {
    expect(() => parseEpoch('1971-12-31T00:00:00', 'UTC')).toThrow(/before 1972-01-01/);
  });
});

describe('formatEpoch', () => {
  it('carries rounding into the next minute instead of printing second 60', () => {
    expect(formatEpoch(parseEpoch('2045-06-01T12:30:59.9996', 'TDB'), 'TDB', 3)).toBe('2045-06-01T12:31:00.000');
    expect(formatUtc(parseEpoch('2016-12-31T23:59:60.9999', 'UTC'), 3)).toBe('2017-01-01T00:00:00.000Z');
  });

  it('refuses what is no epoch', () => {
    expect(() => formatUtc(Number.NaN)).toThrow(TypeError);
    for (const epoch of [1e300, -1e300, 2.6e11, -6.4e10]) expect(() => formatEpoch(epoch, 'TDB')).toThrow(RangeError);
  });
});

describe('round trips', () => {
  it('dates and day numbers invert each other', () => {
    fc.assert(
      fc.property(fc.integer({ min: -700_000, max: 2_900_000 }), (day) => {
        const date = dateOf(day);
        expect(dayNumber(date.year, date.month, date.day)).toBe(day);
      }),
    );
  });

  it('epochs survive printing in every scale to the printed digits', () => {
    fc.assert(
      fc.property(
        fc.constantFrom(...TIME_SCALES),
        fc.double({ min: -8.5e8, max: 3e9, noNaN: true }),
        (scale, epochTdbS) => {
          // Half of the last printed µs and the spacing of doubles at 3e9 s.
          const tolerance = 0.5e-6 + 1e-6;
          expect(Math.abs(parseEpoch(formatEpoch(epochTdbS, scale, 6), scale) - epochTdbS)).toBeLessThan(tolerance);
        },
      ),
      { numRuns: 2000 },
    );
  });

  it('agrees with the calendar of the language over four centuries', () => {
    // Source: ECMAScript Date (proleptic Gregorian calendar of ISO 8601).
    for (let day = -80_000; day < 80_000; day += 37) {
      const date = dateOf(day);
      const expected = new Date(Date.UTC(2000, 0, 1) + day * 86_400_000);
      expect([date.year, date.month, date.day]).toEqual([
        expected.getUTCFullYear(),
        expected.getUTCMonth() + 1,
        expected.getUTCDate(),
      ]);
    }
  });
});
