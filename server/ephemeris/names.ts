import { AppError } from '../errors.ts';
import { TIME_SCALES, type TimeScale } from '../time/index.ts';
import type { InputFrame } from './nodes.ts';

/** A value of a message for comparison: letter case and underscores carry no meaning (CCSDS 502.0-B-3, 7.5). */
export function plainName(value: string): string {
  return value.toUpperCase().replaceAll('_', ' ').replace(/\s+/g, ' ').trim();
}

const ICRF_NAMES = /^(EME ?2000|J2000|ICRF ?-?\d*|GCRF ?-?\d*)$/;
const ECLIPTIC_NAMES = /^(ECLIP ?J2000|ECLIPTIC ?J2000)$/;

/**
 * The inertial axes that a frame name stands for.
 *
 * @throws {AppError} FRAME_REFUSED for rotating frames, frames of date and unknown names
 */
export function frameOf(name: string, line?: number): InputFrame {
  const plain = plainName(name);
  if (ICRF_NAMES.test(plain)) return 'ICRF';
  if (ECLIPTIC_NAMES.test(plain)) return 'ECLIPJ2000';
  const at = line === undefined ? '' : `Line ${line}: `;
  throw new AppError(
    'FRAME_REFUSED',
    `${at}the reference frame "${name}" is not one of the inertial frames EME2000, J2000, ICRF, GCRF and ECLIPJ2000.`,
    [
      {
        ...(line === undefined ? {} : { line }),
        field: 'REF_FRAME',
        detail: 'not an accepted inertial frame',
        got: name,
      },
    ],
  );
}

const REFUSED_SCALES: Readonly<Record<string, string>> = {
  UT1: 'UT1 needs Earth-orientation data',
  TCG: 'TCG runs with a clock at the centre of the Earth and is not used for ephemerides of the outer planets',
  GMST: 'sidereal time is an angle of the Earth',
  MET: 'mission elapsed time needs its zero point from an agreement between the parties',
  MRT: 'mission relative time needs its zero point from an agreement between the parties',
  SCLK: 'a spacecraft clock needs its correlation with a uniform scale',
};

/** @throws {AppError} TIME_SYSTEM_REFUSED with the reason */
export function timeScaleOf(name: string, line?: number): TimeScale {
  const plain = plainName(name);
  const scale = TIME_SCALES.find((candidate) => candidate === plain);
  if (scale !== undefined) return scale;
  const at = line === undefined ? '' : `Line ${line}: `;
  const reason = REFUSED_SCALES[plain] ?? `"${name}" is not among ${TIME_SCALES.join(', ')}`;
  throw new AppError('TIME_SYSTEM_REFUSED', `${at}the time system ${name} cannot be used: ${reason}.`, [
    { ...(line === undefined ? {} : { line }), field: 'TIME_SYSTEM', detail: reason, got: name },
  ]);
}

/** cos and sin of the obliquity 84381.448 arcsec that defines ECLIPJ2000 (IAU 1976; frame 17 of SPK kernels). */
const OBLIQUITY_RAD = (84_381.448 / 3600) * (Math.PI / 180);
const COS_OBLIQUITY = Math.cos(OBLIQUITY_RAD);
const SIN_OBLIQUITY = Math.sin(OBLIQUITY_RAD);

/** Turns a state from ecliptic to ICRF axes in place; `offset` is where its six numbers start. */
export function eclipticToIcrfInPlace(state: Float64Array, offset: number): void {
  for (let i = offset; i < offset + 6; i += 3) {
    const y = state[i + 1];
    const z = state[i + 2];
    state[i + 1] = y * COS_OBLIQUITY - z * SIN_OBLIQUITY;
    state[i + 2] = y * SIN_OBLIQUITY + z * COS_OBLIQUITY;
  }
}
