import type { OtherSourceInput } from '../dose/index.ts';
import type { AssessedCase, AssessmentInput, PartInput } from '../margin/index.ts';
import type { StackInput } from '../shielding/types.ts';
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
}

export interface SnapshotOption {
  readonly optionId: string;
  readonly name: string;
  readonly places: readonly {
    readonly placeId: string;
    readonly name: string;
    readonly shield: { readonly kind: 'stack'; readonly stack: StackInput };
    readonly areaM2?: number;
    readonly holdsAllParts?: boolean;
  }[];
}
