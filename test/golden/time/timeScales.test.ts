import { describe, expect, it } from 'vitest';
import { formatEpoch, formatUtc, parseEpoch, utcToTdbS } from '../../../server/time/index.ts';

/** Half of the last printed digit, ms. */
const MILLISECOND_PRINT_S = 0.5e-3;
/** Half of the last printed digit, µs. */
const MICROSECOND_PRINT_S = 0.5e-6;

describe('time scales against published values', () => {
  it('puts J2000 at 11:58:55.816 UTC', () => {
    // Source: IAU definition of J2000.0 (2000-01-01T12:00:00 TT) with TAI − UTC = 32 s (Bulletin C) and TT − TAI = 32.184 s.
    expect(parseEpoch('2000-01-01T11:58:55.816', 'UTC')).toBeCloseTo(parseEpoch('2000-01-01T12:00:00', 'TT'), 9);
    expect(formatUtc(0)).toBe('2000-01-01T11:58:55.816Z');
  });

  it.each([
    // Source: NAIF tutorial on time conversion ("2004 jun 11 19:32:00" → ET), digits from memory of the printed page.
    ['2004-06-11T19:32:00', 140254384.184625, MICROSECOND_PRINT_S],
    // Source: independent evaluation of NAIF kernels vgr2.ura182 and vgr2_nep097 with naif0012.tls (fixtures/golden/encounters).
    ['1986-01-24T17:58:50.523', -439754414.292, MILLISECOND_PRINT_S],
    ['1989-08-25T03:55:40.120', -326707403.697, MILLISECOND_PRINT_S],
  ])('%s UTC is %f s TDB', (utc, tdbS, tolerance) => {
    expect(Math.abs(utcToTdbS(utc) - tdbS)).toBeLessThanOrEqual(tolerance);
  });

  it('keeps the leap second of 2016 apart from its neighbours', () => {
    // Source: IERS Bulletin C 52: 2016-12-31 23h 59m 59s, 23h 59m 60s, 2017-01-01 0h 0m 0s.
    const before = utcToTdbS('2016-12-31T23:59:59');
    const leap = utcToTdbS('2016-12-31T23:59:60');
    const after = utcToTdbS('2017-01-01T00:00:00');
    expect(leap - before).toBeCloseTo(1, 6);
    expect(after - leap).toBeCloseTo(1, 6);
    expect(formatUtc(leap + 0.25)).toBe('2016-12-31T23:59:60.250Z');
    expect(formatUtc(after)).toBe('2017-01-01T00:00:00.000Z');
  });

  it('holds GPS time 18 s ahead of UTC in 2017 and equal to it in 1980', () => {
    // Source: IS-GPS-200 (GPS epoch 1980-01-06T00:00:00 UTC) and Bulletin C 52 (GPS − UTC = 18 s from 2017-01-01).
    expect(parseEpoch('1980-01-06T00:00:00', 'GPS')).toBeCloseTo(utcToTdbS('1980-01-06T00:00:00'), 6);
    expect(parseEpoch('2017-01-01T00:00:18', 'GPS')).toBeCloseTo(utcToTdbS('2017-01-01T00:00:00'), 6);
  });

  it('has TCB and TDB 65.5 µs apart at the origin of TCB', () => {
    // Source: IAU 2006 Resolution B3: TDB = TCB − L_B × 0 − 6.55e-5 s at 1977-01-01T00:00:32.184 TCB.
    const tcb = parseEpoch('1977-01-01T00:00:32.184', 'TCB');
    const tdb = parseEpoch('1977-01-01T00:00:32.184', 'TDB');
    expect(tcb - tdb).toBeCloseTo(-6.55e-5, 6);
    // Source: rate L_B of the same resolution over 364.25 days.
    expect(parseEpoch('1977-12-31T06:00:32.184', 'TCB') - parseEpoch('1977-12-31T06:00:32.184', 'TDB')).toBeCloseTo(
      -1.550519768e-8 * 364.25 * 86_400 - 6.55e-5,
      6,
    );
  });

  it('never lets TDB and TT part by more than 1.7 ms', () => {
    // Source: amplitude 1.657 ms of the annual term (Explanatory Supplement to the Astronomical Almanac, 2013, eq. 3.39).
    for (let month = 1; month <= 12; month++) {
      const text = `2044-${String(month).padStart(2, '0')}-03T00:00:00`;
      expect(Math.abs(parseEpoch(text, 'TT') - parseEpoch(text, 'TDB'))).toBeLessThan(1.7e-3);
    }
    expect(formatEpoch(parseEpoch('2044-03-01T00:00:00.5', 'TT'), 'TT', 6)).toBe('2044-03-01T00:00:00.500000');
  });
});
