import { AppError } from '../errors.ts';
import { dipolePeriods } from './dipolePeriods.ts';
import { DriftShellTracer } from './driftShell.ts';
import { LocalField } from './motion.ts';
import { kineticEnergyMeV, momentumOverMc, rigidityNtRadii, type SpeciesId } from './species.ts';
import type { FieldModel } from './types.ts';

/** How well L, I and B_m describe a particle on one shell. */
export interface AdiabaticityRow {
  readonly lShell: number;
  /** Periods in the centred dipole of the same moment, s. */
  readonly gyroPeriodS: number;
  readonly bouncePeriodS: number;
  readonly driftPeriodS: number;
  /** Largest gyroradius over radius of curvature at the field minima of the shell; null where the shell does not close. */
  readonly epsilon: number | null;
  /** Energy at which epsilon reaches EPSILON_LIMIT: above it the labels fail. */
  readonly energyLimitMeV: number | null;
  readonly adiabatic: boolean | null;
}

/**
 * Gyroradius over radius of curvature of the line, both at the field minimum, above which the first invariant is no longer
 * kept and a particle has no L. Common practice, no source: values between 0.03 and 0.13 are used.
 */
export const EPSILON_LIMIT = 0.1;

const L_MIN = 1;
const L_MAX = 25;
const SHELL_LINES = 24;

/**
 * Periods and the limit of the adiabatic labels at each L of a model.
 *
 * epsilon is that of a particle of 90° (gyroradius p/(|q| B_min)), worst over the lines of the drift shell of the given
 * equatorial pitch angle, in the full field: in a dipole epsilon = 3 p L²/(|q| B₀ a).
 *
 * @param lShells - reference radii, 1 to 25
 * @param equatorialPitchAngleDeg - of the shell and of the periods, 5 to 90
 * @throws {AppError} FIELD_POINT_INVALID for an L, an energy or a pitch angle out of range
 */
export function adiabaticity(
  model: FieldModel,
  species: SpeciesId,
  energyMeV: number,
  lShells: readonly number[],
  equatorialPitchAngleDeg = 45,
): AdiabaticityRow[] {
  refuseOutside('energyMeV', energyMeV, 1e-3, 1e5, 'MeV');
  refuseOutside('equatorialPitchAngleDeg', equatorialPitchAngleDeg, 5, 90, 'degrees');
  for (const lShell of lShells) refuseOutside('lShells', lShell, L_MIN, L_MAX, 'reference radii');
  const tracer = new DriftShellTracer(model);
  const local = new LocalField(model);
  const alpha = (equatorialPitchAngleDeg * Math.PI) / 180;
  const momentum = momentumOverMc(species, energyMeV);
  const rigidity = rigidityNtRadii(species, model);
  return lShells.map((lShell) => {
    const equatorNt = model.dipoleMomentNt / lShell ** 3;
    // Shells of I = 0 wander between minima; a hair above they are well defined.
    const mirrorNt = Math.max(equatorNt / Math.sin(alpha) ** 2, 1.02 * equatorNt);
    const shell = tracer.shell(lShell, mirrorNt, SHELL_LINES);
    let sharpest = 0;
    for (const { minimumPoint } of shell.lines) {
      local.at(minimumPoint[0], minimumPoint[1], minimumPoint[2]);
      sharpest = Math.max(sharpest, local.curvature() / local.magnitudeNt);
    }
    const epsilon = shell.closed ? momentum * rigidity * sharpest : null;
    return {
      lShell,
      ...dipolePeriods(model, species, energyMeV, lShell, alpha),
      epsilon,
      energyLimitMeV: shell.closed ? kineticEnergyMeV(species, EPSILON_LIMIT / (rigidity * sharpest)) : null,
      adiabatic: epsilon === null ? null : epsilon < EPSILON_LIMIT,
    };
  });
}

function refuseOutside(field: string, value: number, least: number, most: number, unit: string): void {
  if (value >= least && value <= most) return;
  throw new AppError('FIELD_POINT_INVALID', `${field} is ${value}; ${least} to ${most} ${unit} are allowed.`, [
    { field, detail: 'out of range', got: value, limit: value < least ? least : most, unit },
  ]);
}
