export { type DamageDose, foldDamage } from './damage.ts';
export { type DoseDepthCurve, depthsWithin, doseDepthCurve, readDoseDepth } from './doseDepth.ts';
export { dot, foldDose, foldTransmittedElectrons } from './fold.ts';
export {
  type BinnedHistory,
  binHistory,
  CHARGING_LIMITS,
  type ChargingLimits,
  ELEMENTARY_CHARGE_PC,
  type PeakRate,
  peakDoseRate,
  type TransmittedPeak,
  transmittedPeak,
} from './history.ts';
export {
  checkOtherSource,
  kingEventExample,
  kingEventIntegralPerCm2,
  type OtherSpectra,
  otherSpectra,
} from './otherSources.ts';
export {
  addVariantInto,
  ELECTRON_BINS,
  nominalEdges,
  PROTON_BINS,
  SPECIES,
  spectraByEvidence,
  spectraFromEdges,
  type VariantWeights,
} from './spectra.ts';
export type {
  DoseDepthTable,
  FluenceSpectra,
  FoldedDose,
  OtherFluenceInput,
  OtherSourceInput,
} from './types.ts';
