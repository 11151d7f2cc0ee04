export {
  epochOfBytes,
  formatEpoch,
  formatUtc,
  LAST_LEAP_TDB_S,
  parseEpoch,
  utcToTdbS,
  whyNoEpoch,
} from './epoch.ts';
export { HELD_TAI_MINUS_UTC_S } from './leapSeconds.ts';
export { TIME_SCALES, type TimeScale } from './scales.ts';
