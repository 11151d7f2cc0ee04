import { AppError } from '../errors.ts';
import { dateOf, dayNumber, daysInMonth, firstOfYear, isLeapYear } from './calendar.ts';
import { hasLeapSecond, LAST_STEP_DAY, taiMinusUtcS, utcOfTai } from './leapSeconds.ts';
import { GPS_MINUS_TAI_S, type TimeScale, TT_MINUS_TAI_S, tcbToTdbS, tdbToTcbS, tdbToTtS, ttToTdbS } from './scales.ts';

const DASH = 0x2d;
const DOT = 0x2e;
const ZERO = 0x30;
const COLON = 0x3a;
const UPPER_T = 0x54;
const UPPER_Z = 0x5a;
/** Day 0 starts at midnight, J2000 is its noon. */
const NOON_S = 43_200;
/** Years 0002 to 9998, inside the four digits of a year. */
const EARLIEST_S = -1998 * 365.25 * 86_400;
const LATEST_S = 7998 * 365.25 * 86_400;
const encoder = new TextEncoder();

/**
 * Epoch of `YYYY-MM-DDThh:mm:ss[.d…][Z]` or `YYYY-DDDThh:mm:ss[.d…][Z]` (CCSDS 502.0-B-3, 7.5.10) in bytes.
 *
 * The trailing Z is allowed in every scale, because some writers append it; the scale is the one named. Seconds of 60
 * are accepted only in UTC days that end with a leap second. Nothing is allocated.
 *
 * @returns TDB seconds past J2000, or NaN when the bytes have another form, the date does not exist, or a UTC date lies
 * before 1972
 */
export function epochOfBytes(bytes: Uint8Array, start: number, end: number, scale: TimeScale): number {
  if (end > start && bytes[end - 1] === UPPER_Z) end--;
  const length = end - start;
  if (length < 17 || bytes[start + 4] !== DASH) return Number.NaN;
  const year = digits(bytes, start, 4);
  let day: number;
  let clock: number;
  if (bytes[start + 8] === UPPER_T) {
    const dayOfYear = digits(bytes, start + 5, 3);
    if (!(dayOfYear >= 1 && dayOfYear <= (isLeapYear(year) ? 366 : 365))) return Number.NaN;
    day = firstOfYear(year) + dayOfYear - 1;
    clock = start + 9;
  } else {
    if (bytes[start + 7] !== DASH || bytes[start + 10] !== UPPER_T || length < 19) return Number.NaN;
    const month = digits(bytes, start + 5, 2);
    const dayOfMonth = digits(bytes, start + 8, 2);
    if (!(month >= 1 && month <= 12 && dayOfMonth >= 1 && dayOfMonth <= daysInMonth(year, month))) return Number.NaN;
    day = dayNumber(year, month, dayOfMonth);
    clock = start + 11;
  }
  if (end - clock < 8 || bytes[clock + 2] !== COLON || bytes[clock + 5] !== COLON) return Number.NaN;
  const hour = digits(bytes, clock, 2);
  const minute = digits(bytes, clock + 3, 2);
  const second = digits(bytes, clock + 6, 2);
  if (!(hour <= 23 && minute <= 59 && second <= 60)) return Number.NaN;
  if (second === 60 && !(scale === 'UTC' && hour === 23 && minute === 59 && hasLeapSecond(day))) return Number.NaN;
  let fraction = 0;
  if (clock + 8 < end) {
    if (bytes[clock + 8] !== DOT || clock + 9 === end || end - clock > 40) return Number.NaN;
    let scaled = 0;
    let divisor = 1;
    for (let i = clock + 9; i < end; i++) {
      const digit = bytes[i] - ZERO;
      if (!(digit >= 0 && digit <= 9)) return Number.NaN;
      // Beyond 15 digits nothing of a double is left to change.
      if (i < clock + 24) {
        scaled = scaled * 10 + digit;
        divisor *= 10;
      }
    }
    fraction = scaled / divisor;
  }
  return tdbOfReading(day, hour * 3600 + minute * 60 + second + fraction, scale);
}

/** Unsigned number of `count` digits, NaN when another character is among them. */
function digits(bytes: Uint8Array, start: number, count: number): number {
  let value = 0;
  for (let i = start; i < start + count; i++) {
    const digit = bytes[i] - ZERO;
    if (!(digit >= 0 && digit <= 9)) return Number.NaN;
    value = value * 10 + digit;
  }
  return value;
}

/**
 * TDB seconds past J2000 of a clock reading in a scale.
 *
 * @param day - days since 2000-01-01 in that scale
 * @param secondOfDay - s
 * @returns NaN for UTC before 1972-01-01
 */
function tdbOfReading(day: number, secondOfDay: number, scale: TimeScale): number {
  const sinceNoonS = day * 86_400 - NOON_S + secondOfDay;
  switch (scale) {
    case 'TDB':
      return sinceNoonS;
    case 'TCB':
      return tcbToTdbS(sinceNoonS);
    case 'TT':
      return ttToTdbS(sinceNoonS);
    case 'TAI':
      return ttToTdbS(sinceNoonS + TT_MINUS_TAI_S);
    case 'GPS':
      return ttToTdbS(sinceNoonS - GPS_MINUS_TAI_S + TT_MINUS_TAI_S);
    case 'UTC':
      return ttToTdbS(sinceNoonS + taiMinusUtcS(day) + TT_MINUS_TAI_S);
  }
}

/**
 * Epoch of an ISO 8601 text in one of the two forms of the orbit data messages.
 *
 * @param text - `YYYY-MM-DDThh:mm:ss[.d…][Z]` or `YYYY-DDDThh:mm:ss[.d…][Z]`, nothing else
 * @param scale - the scale the text is in
 * @returns TDB seconds past J2000
 * @throws {AppError} EPOCH_UNREADABLE
 * @example parseEpoch('2000-01-01T12:00:00', 'TDB') // 0
 */
export function parseEpoch(text: string, scale: TimeScale): number {
  const bytes = encoder.encode(text);
  const epochTdbS = epochOfBytes(bytes, 0, bytes.length, scale);
  if (Number.isNaN(epochTdbS)) throw new AppError('EPOCH_UNREADABLE', whyNoEpoch(text, scale));
  return epochTdbS;
}

/** The sentence that says what is wrong with an epoch that could not be read. */
export function whyNoEpoch(text: string, scale: TimeScale): string {
  const shown = text.length > 60 ? `${text.slice(0, 60)}…` : text;
  const bytes = encoder.encode(text);
  if (scale === 'UTC' && !Number.isNaN(epochOfBytes(bytes, 0, bytes.length, 'TAI'))) {
    return `"${shown}" lies before 1972-01-01, when UTC took its present form; give it in TAI, TT or TDB.`;
  }
  if (/T\d\d:\d\d:60/.test(text)) {
    return `"${shown}" has a second of 60, which exists only in UTC at a listed leap second.`;
  }
  return `"${shown}" is no epoch of the form YYYY-MM-DDThh:mm:ss[.d][Z] or YYYY-DDDThh:mm:ss[.d][Z].`;
}

/** TDB seconds past J2000 of a UTC text, as in `parseEpoch(text, 'UTC')`. */
export function utcToTdbS(text: string): number {
  return parseEpoch(text, 'UTC');
}

/**
 * ISO 8601 text of an epoch in a time scale, rounded to a number of decimals, without a trailing Z.
 *
 * @param fractionDigits - 0 to 9
 * @throws {TypeError} when the epoch is not finite
 * @throws {RangeError} for UTC before 1972, and for epochs outside the years 0002 to 9998
 */
export function formatEpoch(epochTdbS: number, scale: TimeScale, fractionDigits = 3): string {
  if (!Number.isFinite(epochTdbS)) throw new TypeError(`An epoch must be finite, got ${epochTdbS}`);
  if (epochTdbS < EARLIEST_S || epochTdbS > LATEST_S) {
    throw new RangeError(`${epochTdbS} s lies outside the calendar years 0002 to 9998`);
  }
  const unit = 10 ** fractionDigits;
  // Rounding before the split keeps 59.9996 s from being printed as 60.000 s. Whole seconds are split off first, so
  // that the product with 10⁹ stays exact.
  const reading = readingS(epochTdbS, scale) + NOON_S;
  let whole = Math.floor(reading);
  let ticks = Math.round((reading - whole) * unit);
  if (ticks === unit) {
    whole++;
    ticks = 0;
  }
  const moment =
    scale === 'UTC'
      ? utcOfTai(whole)
      : { day: Math.floor(whole / 86_400), secondOfDay: whole - 86_400 * Math.floor(whole / 86_400) };
  const date = dateOf(moment.day);
  const leap = moment.secondOfDay >= 86_400;
  const hour = leap ? 23 : Math.floor(moment.secondOfDay / 3600);
  const minute = leap ? 59 : Math.floor(moment.secondOfDay / 60) % 60;
  const second = leap ? 60 : moment.secondOfDay % 60;
  const text = `${pad(date.year, 4)}-${pad(date.month, 2)}-${pad(date.day, 2)}T${pad(hour, 2)}:${pad(minute, 2)}:${pad(second, 2)}`;
  return fractionDigits === 0 ? text : `${text}.${pad(ticks, fractionDigits)}`;
}

/** Seconds past J2000 noon of the scale itself; TAI seconds for UTC, which the leap seconds then split. */
function readingS(epochTdbS: number, scale: TimeScale): number {
  switch (scale) {
    case 'TDB':
      return epochTdbS;
    case 'TCB':
      return tdbToTcbS(epochTdbS);
    case 'TT':
      return tdbToTtS(epochTdbS);
    case 'TAI':
    case 'UTC':
      return tdbToTtS(epochTdbS) - TT_MINUS_TAI_S;
    case 'GPS':
      return tdbToTtS(epochTdbS) - TT_MINUS_TAI_S + GPS_MINUS_TAI_S;
  }
}

function pad(value: number, width: number): string {
  return String(value).padStart(width, '0');
}

/**
 * UTC of an epoch as ISO 8601 text ending in Z.
 *
 * @example formatUtc(0) // '2000-01-01T11:58:55.816Z'
 */
export function formatUtc(epochTdbS: number, fractionDigits = 3): string {
  return `${formatEpoch(epochTdbS, 'UTC', fractionDigits)}Z`;
}

/** Epoch of the last listed leap second: UTC later than this is a projection. */
export const LAST_LEAP_TDB_S = tdbOfReading(LAST_STEP_DAY, 0, 'UTC');
