/** Flux along a path: time history, peaks and mission-integrated spectra over rotation phases. */
export {
  beltsOf,
  computeExposure,
  type Exposure,
  type ExposureOptions,
  exposureKey,
  RANKING_THRESHOLD_MEV,
} from './exposure.ts';
export { type FluenceBand, type FluencePercentiles, TIME_SIGMA_DEX } from './percentiles.ts';
export { integralFluence, variantEdges } from './spectra.ts';
export { DEFAULT_THRESHOLDS_MEV, type ExposureSummary, type SpeciesSummary } from './summary.ts';
export type { EnvironmentChoice, ExposureVariant, FluenceArtefact, FluxHistory, PhaseMode } from './types.ts';
export {
  DEFAULT_SWEEP_COUNT,
  defaultPhaseMode,
  PHASE_KNOWN_SIGMA_DEG,
  refuseOtherPlanet,
  rotationModelFor,
} from './variants.ts';
