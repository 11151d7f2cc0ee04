/** Gregorian calendar against a count of days; days start at midnight and day 0 is 2000-01-01. */

const DAYS_BEFORE_MONTH = [0, 31, 59, 90, 120, 151, 181, 212, 243, 273, 304, 334];
const DAYS_IN_MONTH = [31, 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31];

export function isLeapYear(year: number): boolean {
  return year % 4 === 0 && (year % 100 !== 0 || year % 400 === 0);
}

export function daysInMonth(year: number, month: number): number {
  return month === 2 && isLeapYear(year) ? 29 : DAYS_IN_MONTH[month - 1];
}

/** Days from 2000-01-01 to a date of the proleptic Gregorian calendar, negative before. */
export function dayNumber(year: number, month: number, day: number): number {
  return firstOfYear(year) + DAYS_BEFORE_MONTH[month - 1] + (month > 2 && isLeapYear(year) ? 1 : 0) + day - 1;
}

/** Days from 2000-01-01 to January 1 of a year. */
export function firstOfYear(year: number): number {
  const y = year - 1;
  // 730119 is the same count of leap days and years for year 2000.
  return 365 * y + Math.floor(y / 4) - Math.floor(y / 100) + Math.floor(y / 400) - 730_119;
}

/** Calendar date of a day number. */
export function dateOf(day: number): { year: number; month: number; day: number } {
  let year = 2000 + Math.floor(day / 365.2425);
  while (firstOfYear(year) > day) year--;
  while (firstOfYear(year + 1) <= day) year++;
  let rest = day - firstOfYear(year);
  let month = 1;
  while (rest >= daysInMonth(year, month)) {
    rest -= daysInMonth(year, month);
    month++;
  }
  return { year, month, day: rest + 1 };
}
