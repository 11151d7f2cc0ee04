/** The magnetic field: models, lines, shells and the labels of points. */
export { type AdiabaticityRow, adiabaticity, EPSILON_LIMIT } from './adiabaticity.ts';
export { type DriftShell, type DriftShellLine, DriftShellTracer } from './driftShell.ts';
export { evaluatePoint, type FieldPoint, type Footpoint, fieldLinePoints } from './evaluate.ts';
export { makeLabel, tracedLabeller } from './labeller.ts';
export { bLossNtAt, LOSS_ALTITUDE_KM, lossCurve } from './lossCurve.ts';
export { type FieldMapShard, type FieldMapTask, fieldLabeller, traceFieldMapShard } from './map/index.ts';
export { defaultFieldModel, FIELD_MODELS, fieldModel, isFieldModelId } from './models.ts';
export { type ParticleMotion, type ParticleStart, type TraceLimits, traceParticle } from './particle.ts';
export { type ShellSplitting, shellSplitting } from './shellSplitting.ts';
export { SPECIES, type SpeciesId } from './species.ts';
export type { FieldModel, FieldModelId, MagneticLabel, MagneticLabeller, UntrappedReason } from './types.ts';
