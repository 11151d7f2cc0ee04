import { readReferenceColumns } from '../constants/reference.ts';
import { dayNumber } from './calendar.ts';

/**
 * TAI − UTC. The list starts in 1972, when UTC took its present form; after its last step the value is held, which is a
 * projection.
 *
 * @source db/reference/leap-seconds/SOURCE.md
 */
const table = readReferenceColumns('leap-seconds', 'table.csv');
const offsets = table.get('taiMinusUtcS')!;

/** Day numbers (days since 2000-01-01) at whose 00:00:00 UTC the offsets start to hold; shape (n,). */
const stepDays = Float64Array.from(offsets, (_, i) =>
  dayNumber(table.get('year')![i], table.get('month')![i], table.get('day')![i]),
);
const LAST = offsets.length - 1;

/** Day of the last listed step, days since 2000-01-01: UTC later than this holds the last offset. */
export const LAST_STEP_DAY = stepDays[LAST];
/** TAI − UTC after the last listed step, s. */
export const HELD_TAI_MINUS_UTC_S = offsets[LAST];

/** TAI − UTC on a UTC day, s; NaN before 1972-01-01. */
export function taiMinusUtcS(day: number): number {
  for (let i = LAST; i >= 0; i--) if (day >= stepDays[i]) return offsets[i];
  return Number.NaN;
}

/** Whether a UTC day ends with a leap second, so that 23:59:60 exists in it. */
export function hasLeapSecond(day: number): boolean {
  for (let i = 1; i <= LAST; i++) if (stepDays[i] === day + 1) return true;
  return false;
}

/** A moment of UTC: whole days since 2000-01-01 and seconds of that day, up to 86 401 in a day with a leap second. */
interface UtcMoment {
  day: number;
  secondOfDay: number;
}

/**
 * UTC of a TAI reading.
 *
 * @param taiS - TAI seconds since 2000-01-01T00:00:00 TAI
 * @throws {RangeError} before 1972-01-01 UTC
 */
export function utcOfTai(taiS: number): UtcMoment {
  for (let i = LAST; i >= 0; i--) {
    if (taiS >= stepDays[i] * 86_400 + offsets[i]) {
      const utcS = taiS - offsets[i];
      const day = Math.floor(utcS / 86_400);
      // The second before a step belongs to the day that ends with it: 23:59:60.
      if (i < LAST && day >= stepDays[i + 1]) return { day: day - 1, secondOfDay: utcS - (day - 1) * 86_400 };
      return { day, secondOfDay: utcS - day * 86_400 };
    }
  }
  throw new RangeError('UTC is not defined in its present form before 1972-01-01');
}
