/** The magnetic field: models, lines, shells and the labels of points. */
export { evaluatePoint, type FieldPoint, type Footpoint, fieldLinePoints } from './evaluate.ts';
export { makeLabel, tracedLabeller } from './labeller.ts';
export { bLossNtAt, LOSS_ALTITUDE_KM, lossCurve } from './lossCurve.ts';
export { type FieldMapShard, type FieldMapTask, fieldLabeller, traceFieldMapShard } from './map/index.ts';
export { defaultFieldModel, FIELD_MODELS, fieldModel, isFieldModelId } from './models.ts';
export type { FieldModel, FieldModelId, MagneticLabel, MagneticLabeller, UntrappedReason } from './types.ts';
