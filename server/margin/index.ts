export { type AssessOptions, assess } from './assess.ts';
export { checkAssessmentInput } from './checkInput.ts';
export {
  type AssessmentComparison,
  compareAssessments,
  type DoseChange,
  type InputChange,
  type MarginChange,
  type SettingChange,
} from './compare.ts';
export type {
  AssessedCase,
  AssessedOption,
  AssessedPlace,
  AssessedTrajectory,
  AssessmentInput,
  PartInput,
} from './input.ts';
export { lotCapability, toleranceFactor, zeroFailureSampleSize } from './lot.ts';
export { CAPABILITY_BASES, checkPart, checkParts, preparePart } from './parts.ts';
export { formatPartsCsv, PART_COLUMNS, parsePartsCsv } from './partsCsv.ts';
export { resultHash } from './provenance.ts';
export type * from './result.ts';
export { RESULT_SCHEMA, VERDICTS } from './result.ts';
export { scaleShield, THICKER_FACTOR, THINNER_FACTOR } from './scaleShield.ts';
export {
  checkThickness,
  solveThickness,
  type ThicknessCandidate,
  type ThicknessInput,
  type ThicknessResult,
  type ThicknessSolution,
  type ThicknessTools,
} from './thickness.ts';
export { VERDICT_REASONS, verdictOf } from './verdict.ts';
