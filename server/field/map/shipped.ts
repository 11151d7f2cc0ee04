import { readReferenceBytes } from '../../constants/reference.ts';
import { tracedLabeller } from '../labeller.ts';
import type { FieldModel, FieldModelId, MagneticLabeller } from '../types.ts';
import { decodeFieldMap, fieldMapHeader } from './file.ts';
import { DEFAULT_GRID, type FieldMap, fieldMapKey } from './grid.ts';
import { mappedLabeller } from './lookup.ts';

/**
 * The models whose maps ship under db/reference/field-maps/: those the belts of the planets are written in, and the one
 * that every exposure at Uranus draws beside. Building a map takes longer than an exposure that traces, so no others.
 */
export const MAPPED_MODELS = ['uranus-q3', 'uranus-ah5', 'neptune-o8'] as const satisfies readonly FieldModelId[];

/**
 * The shipped map of a model, or null where there is none for this very field. A file counts only when its key is that
 * of the model, grid and code of today; one made from anything else is left alone, nothing is mended, and the model is
 * traced. A test holds the committed files to today's keys.
 *
 * @throws {TypeError} when a file of the right key is damaged
 */
export function shippedFieldMap(model: FieldModel): FieldMap | null {
  if (!MAPPED_MODELS.some((id) => id === model.id)) return null;
  const bytes = readReferenceBytes('field-maps', `${model.id}.map`);
  return fieldMapHeader(bytes).key === fieldMapKey(model, DEFAULT_GRID) ? decodeFieldMap(bytes) : null;
}

const labellers = new Map<FieldModel, MagneticLabeller>();

/** The quickest labeller of a model that keeps the accuracy of doses: its shipped map, else tracing. One per process. */
export function fieldLabeller(model: FieldModel): MagneticLabeller {
  let labeller = labellers.get(model);
  if (labeller === undefined) {
    const map = shippedFieldMap(model);
    labeller = map === null ? tracedLabeller(model) : mappedLabeller(model, map);
    labellers.set(model, labeller);
  }
  return labeller;
}
