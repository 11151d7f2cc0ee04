export {
  epochOfBytes,
  FIRST_UTC_TDB_S,
  formatEpoch,
  formatUtc,
  LAST_LEAP_TDB_S,
  parseEpoch,
  tdbOfReading,
  utcToTdbS,
  whyNoEpoch,
} from './epoch.ts';
export { HELD_TAI_MINUS_UTC_S } from './leapSeconds.ts';
export { TIME_SCALES, type TimeScale, tdbMinusTtS } from './scales.ts';
