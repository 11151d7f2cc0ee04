import { AppError } from '../errors.ts';
import type { TimeScale } from '../time/index.ts';
import { frameOf, timeScaleOf } from './names.ts';
import type { InputFrame } from './nodes.ts';

export type EpochFormat = 'iso' | 'secondsPastJ2000' | 'julianDate' | 'modifiedJulianDate';
export type LengthUnit = 'km' | 'm' | 'au' | 'planetRadii';
export type SpeedUnit = 'km/s' | 'm/s' | 'km/h' | 'au/d';

/** How the columns of a CSV table are to be read; names are those of its header line. */
export interface CsvColumns {
  readonly epoch: string;
  readonly epochFormat: EpochFormat;
  readonly timeSystem: string;
  readonly position: readonly [string, string, string];
  readonly positionUnit: LengthUnit;
  readonly velocity: readonly [string, string, string];
  readonly velocityUnit: SpeedUnit;
  /** Axes; absent: ICRF, and the reading says that this was assumed. */
  readonly frame?: string;
  /** Centre as in CENTER_NAME; absent: the planet of the request, and the reading says that this was assumed. */
  readonly center?: string;
  readonly objectName?: string;
}

export interface CsvPlan {
  readonly epochIndex: number;
  readonly epochFormat: EpochFormat;
  readonly timeScale: TimeScale;
  readonly stateIndices: readonly number[];
  /** What turns each of the six columns into km or km/s. */
  readonly stateFactors: readonly number[];
  readonly frame: InputFrame;
  /** Empty where nobody named it. */
  readonly frameName: string;
  readonly centerName: string;
}

/** Astronomical unit, km: exact (IAU 2012, Resolution B2). */
const AU_KM = 149_597_870.7;

/**
 * Which column is what. With a mapping, its names; without, the header must name each quantity with its unit, for
 * example `epoch_tdb, x_km, …, vx_km_s, …` or `Epoch (UTC); X [km]; …; VX [km/s]`, and each exactly once.
 *
 * @throws {AppError} CSV_INVALID naming what is missing, unknown or ambiguous
 */
export function planColumns(
  names: readonly string[],
  line: number,
  columns: CsvColumns | undefined,
  planetRadiusKm: number | undefined,
): CsvPlan {
  const repeated = names.find((name, i) => name !== '' && names.indexOf(name) !== i);
  if (repeated !== undefined) throw refuse(line, repeated, 'the header line names this column twice');
  if (columns !== undefined) return mappedPlan(names, line, columns, planetRadiusKm);
  const epoch = only(names, line, 'epoch with its time system', (name) => epochKind(name));
  const state: { index: number; value: number }[] = [];
  for (const axis of ['x', 'y', 'z']) {
    state.push(
      only(names, line, `position ${axis} with its unit`, (name) => positionFactor(name, axis, planetRadiusKm)),
    );
  }
  for (const axis of ['x', 'y', 'z']) {
    state.push(only(names, line, `velocity ${axis} with its unit`, (name) => velocityFactor(name, axis)));
  }
  return {
    epochIndex: epoch.index,
    ...epoch.value,
    stateIndices: state.map(({ index }) => index),
    stateFactors: state.map(({ value }) => value),
    frame: 'ICRF',
    frameName: '',
    centerName: '',
  };
}

function mappedPlan(
  names: readonly string[],
  line: number,
  columns: CsvColumns,
  planetRadiusKm: number | undefined,
): CsvPlan {
  const find = (name: string): number => {
    const index = names.indexOf(name);
    if (index < 0) throw refuse(line, name, `is named in the mapping but not in the header line (${names.join(', ')})`);
    return index;
  };
  const stateNames = [...columns.position, ...columns.velocity];
  const used = [columns.epoch, ...stateNames];
  const twice = used.find((name, i) => used.indexOf(name) !== i);
  if (twice !== undefined) throw refuse(line, twice, 'the mapping uses this column twice');
  const length = lengthFactor(columns.positionUnit, planetRadiusKm, line);
  const speed = SPEED_FACTORS[columns.velocityUnit];
  const timeScale = timeScaleOf(columns.timeSystem);
  if (columns.epochFormat !== 'iso' && timeScale !== 'TDB') {
    throw refuse(line, columns.epoch, 'a count of seconds or days must be in TDB; give other scales as ISO 8601 text');
  }
  return {
    epochIndex: find(columns.epoch),
    epochFormat: columns.epochFormat,
    timeScale,
    stateIndices: stateNames.map(find),
    stateFactors: [length, length, length, speed, speed, speed],
    frame: frameOf(columns.frame ?? 'ICRF'),
    frameName: columns.frame ?? '',
    centerName: columns.center ?? '',
  };
}

/** The one column that `read` recognises. */
function only<T>(
  names: readonly string[],
  line: number,
  what: string,
  read: (name: string) => T | null,
): { index: number; value: T } {
  let found: { index: number; value: T } | null = null;
  for (let index = 0; index < names.length; index++) {
    const value = read(simplified(names[index]));
    if (value === null) continue;
    if (found !== null) {
      throw refuse(
        line,
        names[index],
        `two columns could be the ${what}: "${names[found.index]}" and "${names[index]}"; map the columns`,
      );
    }
    found = { index, value };
  }
  if (found === null) {
    throw refuse(line, what, `no column is recognised as the ${what} among ${names.join(', ')}; map the columns`);
  }
  return found;
}

/** Lower case, every run of other characters than letters, digits and `/` turned into one blank. */
function simplified(name: string): string {
  return name
    .replace(/([a-z])([A-Z])/g, '$1 $2')
    .toLowerCase()
    .replace(/[^a-z0-9/]+/g, ' ')
    .trim();
}

function epochKind(name: string): { epochFormat: EpochFormat; timeScale: TimeScale } | null {
  const iso = /^(?:epoch|time|date) (utc|tai|tt|tdb|tcb|gps)$/.exec(name);
  if (iso !== null) return { epochFormat: 'iso', timeScale: iso[1].toUpperCase() as TimeScale };
  if (/^(?:epoch|time) tdb s$/.test(name)) return { epochFormat: 'secondsPastJ2000', timeScale: 'TDB' };
  if (/^(?:jd|julian date) tdb$/.test(name)) return { epochFormat: 'julianDate', timeScale: 'TDB' };
  if (/^mjd tdb$/.test(name)) return { epochFormat: 'modifiedJulianDate', timeScale: 'TDB' };
  return null;
}

function positionFactor(name: string, axis: string, planetRadiusKm: number | undefined): number | null {
  const match = new RegExp(`^(?:position )?${axis} (km|m|au|planet radii)$`).exec(name);
  if (match === null) return null;
  return lengthFactor(match[1] === 'planet radii' ? 'planetRadii' : (match[1] as LengthUnit), planetRadiusKm, 0);
}

function velocityFactor(name: string, axis: string): number | null {
  const match = new RegExp(`^(?:velocity |v|v )${axis} (k?m)[ /]s$`).exec(name);
  if (match === null) return null;
  return match[1] === 'km' ? 1 : 1e-3;
}

function lengthFactor(unit: LengthUnit, planetRadiusKm: number | undefined, line: number): number {
  if (unit === 'planetRadii') {
    if (planetRadiusKm === undefined) throw refuse(line, 'planetRadii', 'positions in planet radii need `planet`');
    return planetRadiusKm;
  }
  return unit === 'km' ? 1 : unit === 'm' ? 1e-3 : AU_KM;
}

const SPEED_FACTORS: Readonly<Record<SpeedUnit, number>> = {
  'km/s': 1,
  'm/s': 1e-3,
  'km/h': 1 / 3600,
  'au/d': AU_KM / 86_400,
};

function refuse(line: number, field: string, detail: string): AppError {
  return new AppError('CSV_INVALID', `Line ${line}, "${field}": ${detail}.`, [{ line, field, detail }]);
}
