import type { PlanetId } from '../constants/planets.ts';
import { AppError } from '../errors.ts';
import { type FieldModelId, fieldModel } from '../field/index.ts';
import { isRotationModelId, phaseSigmaDeg, ROTATION_MODELS, type RotationModel } from '../frames/rotation.ts';
import { normalQuantile } from '../numeric/distributions.ts';
import type { EnvironmentChoice, ExposureVariant, PhaseMode } from './types.ts';

/** Above this 1 σ phase error the phase counts as unknown and is swept. */
export const PHASE_KNOWN_SIGMA_DEG = 60;
export const DEFAULT_SWEEP_COUNT = 36;
export const MAX_SWEEP_COUNT = 360;
/** Offsets at which a drawn phase is evaluated: equally likely slices of its normal distribution. */
const DRAWN_COUNT = 24;

/** @throws {AppError} ROTATION_MODEL_UNKNOWN, or when the model is of the other planet */
export function rotationModelFor(id: string, planet: PlanetId): RotationModel {
  if (!isRotationModelId(id)) {
    const known = Object.keys(ROTATION_MODELS).join(', ');
    throw new AppError('ROTATION_MODEL_UNKNOWN', `Rotation model "${id}" is not known; known are ${known}.`, [
      { field: 'rotationModelId', detail: `one of ${known}`, got: id },
    ]);
  }
  const model = ROTATION_MODELS[id];
  if (model.planet !== planet) {
    throw new AppError(
      'ROTATION_MODEL_UNKNOWN',
      `Rotation model "${id}" is of ${model.planet}; the path is at ${planet}.`,
      [{ field: 'rotationModelId', detail: 'other planet', got: id }],
    );
  }
  return model;
}

/** What `drawn` or `sweep` to use when the user leaves it open: drawn where the model still holds the phase. */
export function defaultPhaseMode(model: RotationModel, epochTdbS: number): PhaseMode {
  return phaseSigmaDeg(model, epochTdbS) <= PHASE_KNOWN_SIGMA_DEG ? 'drawn' : 'sweep';
}

/**
 * The (field, rotation offset) pairs to follow, weights summing to 1. The chosen field comes first; further fields that
 * the sampling draws at equal odds get the same offsets.
 *
 * @param epochTdbS - arrival, for the phase error of `drawn`
 * @throws {AppError} PHASE_INVALID on an offset or count out of range
 */
export function exposureVariants(
  environment: EnvironmentChoice,
  model: RotationModel,
  epochTdbS: number,
): ExposureVariant[] {
  const offsets = phaseOffsets(environment, model, epochTdbS);
  const fields = sampledFields(environment, model.planet);
  const variants: ExposureVariant[] = [];
  for (const fieldModelId of fields) {
    for (const offsetDeg of offsets) {
      variants.push({
        fieldModelId,
        offsetDeg,
        weight: 1 / (offsets.length * fields.length),
        primary: fieldModelId === environment.fieldModelId,
      });
    }
  }
  return variants;
}

function phaseOffsets(environment: EnvironmentChoice, model: RotationModel, epochTdbS: number): number[] {
  const { phase } = environment;
  if (phase.mode === 'published') return [0];
  if (phase.mode === 'offset') {
    const offsetDeg = phase.offsetDeg;
    if (offsetDeg === undefined || !Number.isFinite(offsetDeg) || Math.abs(offsetDeg) > 360) {
      throw new AppError(
        'PHASE_INVALID',
        `phase.offsetDeg is ${offsetDeg}; a number from -360 to 360 degrees is needed.`,
        [
          {
            field: 'phase.offsetDeg',
            detail: 'missing or out of range',
            got: offsetDeg ?? null,
            limit: 360,
            unit: 'deg',
          },
        ],
      );
    }
    return [offsetDeg];
  }
  if (phase.mode === 'drawn') {
    const sigma = phaseSigmaDeg(model, epochTdbS);
    return Array.from({ length: DRAWN_COUNT }, (_, k) => sigma * normalQuantile((k + 0.5) / DRAWN_COUNT));
  }
  const count = phase.count ?? DEFAULT_SWEEP_COUNT;
  if (!Number.isInteger(count) || count < 4 || count > MAX_SWEEP_COUNT) {
    throw new AppError(
      'PHASE_INVALID',
      `phase.count is ${count}; a whole number from 4 to ${MAX_SWEEP_COUNT} is needed.`,
      [{ field: 'phase.count', detail: 'out of range', got: count, limit: MAX_SWEEP_COUNT }],
    );
  }
  return Array.from({ length: count }, (_, k) => (360 * k) / count);
}

function sampledFields(environment: EnvironmentChoice, planet: PlanetId): FieldModelId[] {
  const chosen = fieldModel(environment.fieldModelId);
  if (chosen.planet !== planet) {
    throw new AppError(
      'FIELD_MODEL_UNKNOWN',
      `Field model "${chosen.id}" is of ${chosen.planet}; the path is at ${planet}.`,
      [{ field: 'fieldModelId', detail: 'other planet', got: chosen.id }],
    );
  }
  const further = environment.sampledFieldModelIds ?? (chosen.id === 'uranus-q3' ? (['uranus-ah5'] as const) : []);
  for (const id of further) refuseOtherPlanet(id, planet, 'sampledFieldModelIds');
  return [chosen.id, ...further.filter((id) => id !== chosen.id)];
}

/** @throws {AppError} FIELD_MODEL_UNKNOWN naming the field of the request */
export function refuseOtherPlanet(id: string, planet: PlanetId, field: string): void {
  if (fieldModel(id).planet === planet) return;
  throw new AppError('FIELD_MODEL_UNKNOWN', `Field model "${id}" is not of ${planet}.`, [
    { field, detail: 'other planet', got: id },
  ]);
}
