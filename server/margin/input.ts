/** What an assessment is made from: a snapshot of plain serialisable values, so that it can run anywhere and again. */
import type { DoseDepthTable, OtherSourceInput } from '../dose/types.ts';
import type { EnvironmentChoice, FluenceArtefact } from '../fluence/types.ts';
import type { ShieldResponse } from '../shielding/types.ts';
import type { CapabilityBasis, PhaseTreatment, ResultNotice, ShieldGeometry } from './result.ts';

export interface AssessedTrajectory {
  readonly trajectoryId: string;
  readonly name: string;
  readonly sourceSha256: string;
  readonly environment: EnvironmentChoice;
  /** First and last epoch of the path, TDB seconds past J2000: repetition k is flown k spans later. */
  readonly startTdbS: number;
  readonly stopTdbS: number;
  readonly fluence: FluenceArtefact;
}

export interface AssessedCase {
  readonly caseId: string;
  readonly name: string;
  readonly legs: readonly { readonly trajectoryId: string; readonly repetitions: number }[];
}

export interface AssessedPlace {
  readonly placeId: string;
  readonly name: string;
  readonly geometry: ShieldGeometry;
  readonly shieldText: string;
  readonly massKg: number | null;
  /** Response of the shield with a silicon target; null with `notAssessed` saying why. */
  readonly response: ShieldResponse | null;
  readonly notAssessed?: string;
  /** The same shield with every layer 10 % thinner and thicker, when the sensitivity is asked for. */
  readonly thinner10Pct?: ShieldResponse;
  readonly thicker10Pct?: ShieldResponse;
  /** The same shield over further target materials. */
  readonly otherTargets?: readonly ShieldResponse[];
  /**
   * Aluminium of the same areal density, mm, by direction: where dose-depth tables of other sources are read. One entry
   * of weight 1 for a plain stack; weights sum to 1. Doses are averaged over it, never thicknesses.
   */
  readonly aluminiumEquivalent?: readonly { readonly weight: number; readonly thicknessMm: number }[];
  /** True for an option made from a bare stack: every part sits here, whatever its own place is called. */
  readonly holdsAllParts?: boolean;
}

export interface AssessedOption {
  readonly optionId: string;
  readonly name: string;
  readonly places: readonly AssessedPlace[];
}

/** A part as entered. Exactly one of a capability and a list of failure doses, or neither: then it is not assessed. */
export interface PartInput {
  readonly partId: string;
  readonly name: string;
  readonly description?: string;
  readonly technology?: string;
  readonly placeId: string;
  readonly capabilityKradSi?: number;
  readonly capabilityBasis?: CapabilityBasis;
  readonly sampleSize?: number;
  readonly doseRateRadSiPerS?: number;
  /** Dose at which each device of the tested lot failed; the capability is then its one-sided tolerance limit. */
  readonly failureDosesKradSi?: readonly number[];
  /** Confidence of the tolerance limit, default 0.90. */
  readonly lotConfidence?: number;
  /** Share of the lot the limit must cover, default 0.99. */
  readonly lotProbability?: number;
  /** Own required margin; absent means the study's. */
  readonly requiredRdm?: number;
}

export interface AssessmentInput {
  readonly name: string;
  readonly study: {
    readonly studyId: string;
    readonly name: string;
    /** Default of every part without its own, > 0; a project input. */
    readonly requiredRdm: number;
    /** 50 to 99.9. */
    readonly verdictPercentile: number;
    readonly phaseTreatment: PhaseTreatment;
    /** Share of extrapolated dose above which a margin met only below p95 is not demonstrated. */
    readonly extrapolatedShareLimit: number;
  };
  readonly trajectories: readonly AssessedTrajectory[];
  readonly cases: readonly AssessedCase[];
  readonly options: readonly AssessedOption[];
  /** Default: the first option. */
  readonly baselineOptionId?: string;
  readonly parts: readonly PartInput[];
  readonly otherSources: readonly OtherSourceInput[];
  readonly sampling: { readonly draws: number; readonly seed: number };
  readonly doseDepthTables: readonly DoseDepthTable[];
  readonly runtime: {
    readonly engineVersion: string;
    readonly nodeVersion: string;
    readonly architecture: string;
  };
  /** Notices of the rooms upstream (trajectory, field, belts) that belong with the result. */
  readonly notices?: readonly ResultNotice[];
}
