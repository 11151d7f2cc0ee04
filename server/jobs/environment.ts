import type { PlanetId } from '../constants/planets.ts';
import { defaultFieldModel, FIELD_MODELS, isFieldModelId } from '../field/index.ts';
import { defaultPhaseMode, type EnvironmentChoice, rotationModelFor } from '../fluence/index.ts';
import { beltModel, defaultBeltModelId } from '../flux/index.ts';
import { defaultRotationModel, isRotationModelId, ROTATION_MODELS } from '../frames/rotation.ts';

/** What a request may say about the environment; all of it optional, and applied where the planet fits. */
export interface EnvironmentRequest {
  readonly fieldModelId?: string;
  readonly rotationModelId?: string;
  readonly beltModelId?: string;
  readonly phase?: EnvironmentChoice['phase'];
  readonly satelliteDips?: boolean;
  readonly protonUpperBound?: boolean;
  readonly solarWindState?: 'as-encountered' | 'long-term-mean';
  /** The uploaded table that `beltModelId` names, by content; absent with built-in belts. */
  readonly beltTable?: { readonly planet: PlanetId; readonly sha256: string };
}

/**
 * The environment of one trajectory: what was asked for where it belongs to this planet, the planet's defaults
 * elsewhere. Unknown ids are left for the rooms to refuse.
 */
export function environmentFor(request: EnvironmentRequest, planet: PlanetId, epochTdbS: number): EnvironmentChoice {
  const field = request.fieldModelId;
  const rotation = request.rotationModelId;
  const belts = request.beltModelId;
  const rotationModelId =
    rotation !== undefined && !(isRotationModelId(rotation) && ROTATION_MODELS[rotation].planet !== planet)
      ? rotation
      : defaultRotationModel(planet).id;
  const fieldModelId =
    field !== undefined && isFieldModelId(field) && FIELD_MODELS[field].planet === planet
      ? field
      : defaultFieldModel(planet).id;
  const { beltTable } = request;
  const beltPlanet = belts === undefined ? null : (beltTable?.planet ?? beltModel(belts).planet);
  const beltModelId = belts !== undefined && beltPlanet === planet ? belts : defaultBeltModelId(planet);
  return {
    fieldModelId,
    rotationModelId,
    beltModelId,
    ...(beltTable !== undefined && beltPlanet === planet ? { beltTableSha256: beltTable.sha256 } : {}),
    phase: request.phase ?? { mode: defaultPhaseMode(rotationModelFor(rotationModelId, planet), epochTdbS) },
    ...(request.satelliteDips === undefined ? {} : { satelliteDips: request.satelliteDips }),
    ...(request.protonUpperBound === undefined ? {} : { protonUpperBound: request.protonUpperBound }),
    ...(request.solarWindState === undefined ? {} : { solarWindState: request.solarWindState }),
  };
}
