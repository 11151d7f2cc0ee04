/** Trapped-particle models: (L, equatorial pitch angle, energy) to intensity and its spread. */
import type { PlanetId } from '../constants/planets.ts';
import { AppError } from '../errors.ts';
import { NEPTUNE_BELTS_ID, neptuneBelts } from './neptune.ts';
import type { BeltOptions } from './parametricModel.ts';
import type { BeltModel } from './types.ts';
import { URANUS_BELTS_ID, uranusBelts } from './uranus.ts';

export { KP_MEASURE, kennelPetschekRatio } from './kennelPetschek.ts';
export type { BeltOptions } from './parametricModel.ts';
export { tableBelts } from './tableModel.ts';
export { type BeltTable, checkBeltTable } from './tableTypes.ts';
export type { BeltModel, BeltSpread, EvidenceRegion } from './types.ts';
export { EVIDENCE_REGIONS } from './types.ts';

export const BELT_MODEL_IDS: readonly string[] = [URANUS_BELTS_ID, NEPTUNE_BELTS_ID];

/** log₁₀ factor on Uranus' electrons for a long-term mean, if the encounter met a rare state (Jasinski et al. 2024). */
export const LONG_TERM_MEAN_OFFSET_DEX = -0.5;

export function defaultBeltModelId(planet: PlanetId): string {
  return planet === 'uranus' ? URANUS_BELTS_ID : NEPTUNE_BELTS_ID;
}

/** @throws {AppError} BELT_MODEL_UNKNOWN with the list of built-in ids */
export function beltModel(id: string, options: BeltOptions = {}): BeltModel {
  if (id === URANUS_BELTS_ID) return uranusBelts(options);
  if (id === NEPTUNE_BELTS_ID) return neptuneBelts(options);
  const known = BELT_MODEL_IDS.join(', ');
  throw new AppError('BELT_MODEL_UNKNOWN', `Belt model "${id}" is not known; built in are ${known}.`, [
    { field: 'beltModelId', detail: `one of ${known}, or an uploaded table`, got: id },
  ]);
}
