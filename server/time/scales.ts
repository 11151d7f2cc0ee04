/**
 * Offsets between the uniform time scales. Every instant inside is TDB seconds past J2000 (2000-01-01T12:00:00 TDB).
 *
 * @source db/reference/leap-seconds/SOURCE.md for every constant
 */
export const TT_MINUS_TAI_S = 32.184;
export const GPS_MINUS_TAI_S = -19;

const K_S = 1.657e-3;
const EB = 1.671e-2;
const M0_RAD = 6.239996;
const M1_RAD_PER_S = 1.99096871e-7;

/** L_B, TDB_0 and T_0 of IAU 2006 Resolution B3. */
const L_B = 1.550519768e-8;
const TDB0_S = -6.55e-5;
/** T_0 = JD 2443144.5003725, in seconds past JD 2451545.0. */
const T0_S = (2443144.5003725 - 2451545) * 86_400;

export const TIME_SCALES = ['UTC', 'TAI', 'TT', 'TDB', 'TCB', 'GPS'] as const;
export type TimeScale = (typeof TIME_SCALES)[number];

/** TDB − TT, s, by the one-term series of the leap-seconds kernel; good to about 30 µs. */
export function tdbMinusTtS(secondsPastJ2000: number): number {
  const m = M0_RAD + M1_RAD_PER_S * secondsPastJ2000;
  return K_S * Math.sin(m + EB * Math.sin(m));
}

/** TDB from TT, both in seconds past J2000 of their own scale. */
export function ttToTdbS(ttS: number): number {
  return ttS + tdbMinusTtS(ttS);
}

/** TT from TDB: the series changes by less than 1e-12 s over the 1.7 ms between the two, so no iteration is needed. */
export function tdbToTtS(tdbS: number): number {
  return tdbS - tdbMinusTtS(tdbS);
}

export function tcbToTdbS(tcbS: number): number {
  return tcbS - L_B * (tcbS - T0_S) + TDB0_S;
}

export function tdbToTcbS(tdbS: number): number {
  return (tdbS - TDB0_S - L_B * T0_S) / (1 - L_B);
}
