import type { OtherSourceInput } from '../dose/index.ts';
import type { AssessedCase, AssessmentInput, PartInput } from '../margin/index.ts';
import type { Enclosed } from '../shielding/mass.ts';
import type { ShieldInput, TargetMaterialId } from '../shielding/types.ts';
import type { StoredTrajectory } from './assessment.ts';
import type { EnvironmentRequest } from './environment.ts';

/** Everything an assessment rests on, copied when it is asked for: later edits and deletions change nothing in it. */
export interface AssessmentSnapshot {
  readonly study: AssessmentInput['study'];
  readonly trajectories: readonly StoredTrajectory[];
  readonly cases: readonly AssessedCase[];
  readonly options: readonly SnapshotOption[];
  readonly parts: readonly PartInput[];
  readonly otherSources: readonly OtherSourceInput[];
  readonly sampling: { readonly draws: number; readonly seed: number };
  readonly environment: EnvironmentRequest;
  readonly baselineOptionId?: string;
  /** False leaves out the doses at layers 10 % thinner and thicker. */
  readonly sensitivity?: boolean;
  /** Materials besides silicon that doses are stated in. */
  readonly otherTargetMaterialIds?: readonly TargetMaterialId[];
}

export interface SnapshotOption {
  readonly optionId: string;
  readonly name: string;
  readonly places: readonly SnapshotPlace[];
}

export interface SnapshotPlace extends Enclosed {
  readonly placeId: string;
  readonly name: string;
  readonly shield: ShieldInput;
  readonly holdsAllParts?: boolean;
}
