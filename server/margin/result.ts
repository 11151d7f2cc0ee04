/**
 * What an assessment returns: plain JSON, units in the names, one row per thing a reader can point at.
 * Doses are in krad of silicon. `null` means "not assessed" or "not asked for", never zero.
 *
 * Two kinds of dose stand side by side. `doseKradSi` of a row is nominal: median belts, nominal field, and the nominal
 * rotation phase (the mean over phases where each repetition of a leg meets its own). `band` comes from sampling
 * belts, phase, field and statistical error together. Margins and verdicts use the band, shares use the nominal dose.
 * The median of the band may lie above the nominal dose: where wide spreads add up over L, the sum gains on the median.
 */
import type { PlanetId } from '../constants/planets.ts';
import type { EnvironmentChoice } from '../fluence/types.ts';
import type { EvidenceRegion } from '../flux/types.ts';
import type { EffortClass, TargetMaterialId } from '../shielding/types.ts';

export const RESULT_SCHEMA = 'sidelong-assessment-1';

export interface Percentiles {
  readonly p05: number;
  readonly p50: number;
  readonly p95: number;
}

/** Dose by what deposited it; `total` is the sum of the other four. */
export interface DoseParts {
  readonly electron: number;
  readonly bremsstrahlung: number;
  readonly proton: number;
  readonly other: number;
  readonly total: number;
}

export type Verdict = 'meets' | 'needsSectorAnalysis' | 'doesNotComply' | 'notDemonstrated' | 'notAssessed';
export const VERDICTS: readonly Verdict[] = [
  'meets',
  'needsSectorAnalysis',
  'doesNotComply',
  'notDemonstrated',
  'notAssessed',
];

/** Why a verdict is what it is; `AssessmentResult.verdictReasons` holds the sentence for each. */
export type VerdictReason =
  | 'marginMet'
  | 'marginMetDespiteExtrapolation'
  | 'belowRequiredBehindSimpleShield'
  | 'belowRequiredWithSectors'
  | 'capabilityBelowDose'
  | 'metOnlyBelow95thPercentile'
  | 'placeMissing'
  | 'noResponse'
  | 'noCapability'
  | 'outsideValidity';

/** How the shield of a place was described: the first three are what sector analysis refines. */
export type ShieldGeometry = 'slab' | 'sphere' | 'shell' | 'sectors' | 'box';

export type PhaseTreatment = 'joint' | 'worst';

export interface ResultNotice {
  readonly code: string;
  readonly severity: 'info' | 'caution';
  readonly text: string;
}

export interface ResultTrajectory {
  readonly trajectoryId: string;
  readonly name: string;
  readonly planet: PlanetId;
  /** SHA-256 of the uploaded bytes, or of the sketch that made it. */
  readonly sourceSha256: string;
  readonly fluenceSha256: string;
  readonly environment: EnvironmentChoice;
}

export interface ResultCase {
  readonly caseId: string;
  readonly name: string;
  readonly planets: readonly PlanetId[];
  readonly legs: readonly {
    readonly trajectoryId: string;
    readonly trajectoryName: string;
    readonly repetitions: number;
  }[];
  /** Groups of passes within 30 days, over all legs and repetitions. */
  readonly passCount: number;
  /** How the rotation phase of repetitions was treated, in one sentence. */
  readonly phaseOfRepetitions: string;
}

export interface ResultPlace {
  readonly placeId: string;
  readonly name: string;
  readonly geometry: ShieldGeometry;
  /** One line: layers outside first with all three thickness units, or sectors, or walls. */
  readonly shieldText: string;
  readonly massKg: number | null;
  readonly response: {
    readonly sha256: string;
    readonly description: string;
    readonly effort: EffortClass;
    readonly targetMaterialId: TargetMaterialId;
  } | null;
  readonly notAssessed: string | null;
}

export interface ResultOption {
  readonly optionId: string;
  readonly name: string;
  /** Sum over the places; null when the mass of one of them is unknown. */
  readonly massKg: number | null;
  readonly baseline: boolean;
  readonly places: readonly ResultPlace[];
}

export type CapabilityBasis = 'test' | 'dataSheet' | 'lot' | 'similarity' | 'estimate';

export interface LotStatistics {
  readonly sampleSize: number;
  readonly geometricMeanKradSi: number;
  /** Standard deviation of ln(failure dose), dimensionless, n − 1 in the denominator. */
  readonly lnSd: number;
  readonly confidence: number;
  readonly probability: number;
  /** One-sided tolerance factor K_TL(n, C, P). */
  readonly toleranceFactor: number;
}

export interface ResultPart {
  readonly partId: string;
  readonly name: string;
  readonly description: string;
  readonly technology: string;
  readonly placeId: string;
  readonly capabilityKradSi: number | null;
  readonly capabilityBasis: CapabilityBasis | null;
  readonly sampleSize: number | null;
  readonly doseRateRadSiPerS: number | null;
  readonly lot: LotStatistics | null;
  readonly requiredRdm: number;
  readonly requiredRdmOwn: boolean;
}

/** Mission-integrated fluence of one trajectory, one pass of it. */
export interface FluenceRow {
  readonly trajectoryId: string;
  readonly species: 'electron' | 'proton';
  readonly energiesMeV: readonly number[];
  /** Omnidirectional differential fluence, nominal, cm⁻² MeV⁻¹, at `energiesMeV`. */
  readonly differentialPerCm2MeV: readonly number[];
  /** Omnidirectional integral fluence above each energy, nominal, cm⁻². */
  readonly integralPerCm2: readonly number[];
  /** Band of the integral fluence at a few thresholds. */
  readonly bands: readonly {
    readonly thresholdMeV: number;
    readonly nominalPerCm2: number;
    readonly bandPerCm2: Percentiles;
  }[];
  /** Share of the nominal fluence above 1 MeV by evidence. */
  readonly byEvidence: Readonly<Record<EvidenceRegion, number>>;
}

export interface DoseDepthRow {
  readonly caseId: string;
  readonly geometry: 'slab' | 'sphere';
  readonly materialId: string;
  readonly targetText: string;
  readonly depthsMm: readonly number[];
  readonly depthsGPerCm2: readonly number[];
  readonly electronKradSi: readonly number[];
  readonly bremsstrahlungKradSi: readonly number[];
  readonly protonKradSi: readonly number[];
  /** Other sources that are defined at that depth; what is left out is named in a notice. */
  readonly otherKradSi: readonly number[];
  readonly totalKradSi: readonly number[];
  readonly bandKradSi: {
    readonly p05: readonly number[];
    readonly p50: readonly number[];
    readonly p95: readonly number[];
  };
}

export interface UncertaintyShare {
  readonly source:
    | 'electronBelt'
    | 'protonBelt'
    | 'timeVariation'
    | 'rotationPhase'
    | 'fieldModel'
    | 'statisticalError';
  /** Share of the variance of log₁₀ dose, 0 to 1; the shares sum to 1. */
  readonly share: number;
}

export interface DamageResult {
  /** Displacement damage dose in silicon behind the shield, MeV/g, nominal. */
  readonly electronMeVPerG: number;
  readonly protonMeVPerG: number;
  readonly totalMeVPerG: number;
  /** Fluence of 1 MeV neutrons with the same damage dose in silicon, cm⁻². */
  readonly neutronEquivalentPerCm2: number;
}

/** Screening for internal charging behind a shield: flags, never a certificate. */
export interface ChargingResult {
  /** Largest one-way transmitted electron current, nominal belts, pA/cm²; null without a flux history. */
  readonly peakCurrentPaPerCm2: number | null;
  readonly peakUtc: string | null;
  /** Largest transmitted electron fluence in any 10 h, nominal belts, cm⁻². */
  readonly fluence10hPerCm2: number | null;
  readonly currentLimitPaPerCm2: number;
  readonly coldCurrentLimitPaPerCm2: number;
  readonly fluence10hLimitPerCm2: number;
  readonly currentFlag: 'below' | 'aboveCold' | 'above' | 'unknown';
  readonly fluenceFlag: 'below' | 'above' | 'unknown';
}

export interface ShieldDoseRow {
  readonly caseId: string;
  readonly optionId: string;
  readonly placeId: string;
  /** Set when nothing could be computed; every other number is then null or empty. */
  readonly notAssessed: string | null;
  readonly doseKradSi: DoseParts | null;
  readonly band: Percentiles | null;
  /** Dose at the study's percentile, with the study's treatment of phase. */
  readonly doseAtVerdictKradSi: number | null;
  /** 1 σ statistical error of the nominal belt dose from the response, relative. */
  readonly statisticalErrorRel: number | null;
  /** Share of the nominal total dose that comes from belts where nothing was measured. */
  readonly extrapolatedFraction: number | null;
  /** Shares of the nominal belt dose; they sum to 1, or are all 0 where the belts bring nothing. */
  readonly byEvidence: Readonly<Record<EvidenceRegion, number>> | null;
  /** Nominal dose of each leg with all its repetitions. */
  readonly byLeg: readonly {
    readonly trajectoryId: string;
    readonly repetitions: number;
    readonly doseKradSi: number;
  }[];
  readonly bySource: readonly { readonly name: string; readonly phase: string; readonly doseKradSi: number }[];
  /** Nominal belt dose against the rotation offset, chosen field model, all repetitions at the same offset. */
  readonly byPhase: readonly { readonly offsetDeg: number; readonly doseKradSi: number }[];
  readonly worstPhase: { readonly offsetDeg: number; readonly doseKradSi: number } | null;
  readonly byFieldModel: readonly { readonly fieldModelId: string; readonly doseKradSi: number }[];
  readonly uncertainty: readonly UncertaintyShare[];
  /** Largest nominal dose rate behind the shield, rad(Si)/s, and when; null without a flux history. */
  readonly peakDoseRate: { readonly radSiPerS: number; readonly utc: string; readonly trajectoryId: string } | null;
  readonly damage: DamageResult | null;
  readonly charging: ChargingResult | null;
  /** Nominal dose in further target materials, krad of that material. */
  readonly otherTargets: readonly { readonly targetMaterialId: TargetMaterialId; readonly doseKrad: DoseParts }[];
}

export interface MarginRow {
  readonly partId: string;
  readonly caseId: string;
  readonly optionId: string;
  readonly placeId: string;
  readonly capabilityKradSi: number | null;
  /** Median dose at the part (p50 of the band). */
  readonly doseKradSi: number | null;
  readonly doseP95KradSi: number | null;
  readonly doseAtVerdictKradSi: number | null;
  readonly requiredRdm: number;
  /** Capability / median dose. */
  readonly achievedRdm: number | null;
  readonly achievedRdmP95: number | null;
  /** Capability / dose at the study's percentile: what the verdict is taken on. */
  readonly achievedRdmAtVerdict: number | null;
  /** P(capability > dose), the lot drawn from its predictive distribution. */
  readonly probabilityAboveDose: number | null;
  /** P(capability > required margin × dose). */
  readonly confidence: number | null;
  readonly verdict: Verdict;
  readonly reason: VerdictReason;
}

/** One option in one case at one place, beside the others. */
export interface ComparisonRow {
  readonly caseId: string;
  readonly optionId: string;
  readonly placeId: string;
  readonly massKg: number | null;
  readonly doseKradSi: Percentiles | null;
  /** True when no other option has both at most this mass and at most this median dose here. */
  readonly nonDominated: boolean | null;
  /** Against the baseline option at the same place; null for the baseline itself or when it has no such place. */
  readonly toBaseline: {
    readonly massKg: number | null;
    readonly doseKradSi: number;
    readonly doseRatio: number;
  } | null;
  readonly lowestMargin: { readonly partId: string; readonly achievedRdmAtVerdict: number } | null;
  readonly verdictCounts: Readonly<Record<Verdict, number>>;
}

export interface SensitivityRow {
  readonly caseId: string;
  readonly optionId: string;
  readonly placeId: string;
  /** Nominal total dose with every layer 10 % thinner or thicker; null when not asked for. */
  readonly thinner10Pct: { readonly doseKradSi: number; readonly ratio: number } | null;
  readonly thicker10Pct: { readonly doseKradSi: number; readonly ratio: number } | null;
  /** Lowest and highest nominal dose over the rotation phase. */
  readonly phase: { readonly lowestKradSi: number; readonly highestKradSi: number } | null;
  /** Nominal total dose with all belt intensities doubled or halved. */
  readonly beltsDoubledKradSi: number;
  readonly beltsHalvedKradSi: number;
  /** Factor on the belts at which the least margin here just meets its requirement at the study's percentile. */
  readonly beltFactorAtRequirement: { readonly partId: string; readonly factor: number } | null;
}

export interface ResultSummary {
  readonly verdictCounts: Readonly<Record<Verdict, number>>;
  readonly byOption: readonly {
    readonly optionId: string;
    readonly verdictCounts: Readonly<Record<Verdict, number>>;
    readonly lowestMargin: LowestMargin | null;
  }[];
  readonly lowestMargin: LowestMargin | null;
  readonly highestExtrapolatedFraction: number | null;
  /** Lightest option whose every part meets its requirement in every case; null when there is none. */
  readonly lightestMeetingOptionId: string | null;
  /** What would change the verdict of the lowest margin, each a full sentence with its numbers. */
  readonly whatWouldChange: readonly string[];
}

/** The margin that is lowest against its requirement at the study's percentile, and what drives it. */
export interface LowestMargin {
  readonly partId: string;
  readonly caseId: string;
  readonly optionId: string;
  readonly placeId: string;
  readonly achievedRdmAtVerdict: number;
  readonly requiredRdm: number;
  readonly verdict: Verdict;
  readonly worstPhaseOffsetDeg: number | null;
  readonly dominantUncertainty: UncertaintyShare | null;
  readonly extrapolatedFraction: number;
}

export interface ResultOtherSource {
  readonly name: string;
  readonly source: string;
  readonly phase: string;
  readonly kind: 'dose' | 'doseDepth' | 'fluence';
  readonly example: boolean;
}

export interface ResultProvenance {
  readonly engineVersion: string;
  readonly nodeVersion: string;
  readonly architecture: string;
  readonly seed: number;
  readonly draws: number;
  readonly inputs: readonly { readonly kind: string; readonly name: string; readonly sha256: string }[];
  readonly inputsSha256: string;
  readonly models: readonly { readonly kind: 'field' | 'rotation' | 'belt' | 'response'; readonly modelId: string }[];
  /** SHA-256 over the canonical JSON (RFC 8785) of the result without record ids and times. */
  readonly resultSha256: string;
}

export interface AssessmentResult {
  readonly schema: typeof RESULT_SCHEMA;
  readonly name: string;
  readonly study: {
    readonly studyId: string;
    readonly name: string;
    readonly requiredRdm: number;
    readonly verdictPercentile: number;
    readonly phaseTreatment: PhaseTreatment;
    readonly extrapolatedShareLimit: number;
  };
  readonly trajectories: readonly ResultTrajectory[];
  readonly cases: readonly ResultCase[];
  readonly options: readonly ResultOption[];
  readonly parts: readonly ResultPart[];
  readonly otherSources: readonly ResultOtherSource[];
  readonly fluence: readonly FluenceRow[];
  readonly doseDepth: readonly DoseDepthRow[];
  readonly shieldDose: readonly ShieldDoseRow[];
  readonly margins: readonly MarginRow[];
  readonly comparison: readonly ComparisonRow[];
  readonly sensitivity: readonly SensitivityRow[];
  readonly summary: ResultSummary;
  readonly verdictReasons: Readonly<Record<VerdictReason, string>>;
  readonly notices: readonly ResultNotice[];
  readonly provenance: ResultProvenance;
}
