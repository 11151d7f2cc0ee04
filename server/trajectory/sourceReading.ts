import type { PlanetId } from '../constants/planets.ts';
import type { PathPiece } from './pieces.ts';
import type { TrajectoryNotice, TrajectorySummary } from './types.ts';

/** The part of a reading that depends on the kind of file. */
export interface SourceReading {
  readonly planet: PlanetId;
  readonly pieces: readonly PathPiece[];
  readonly notices: readonly TrajectoryNotice[];
  readonly facts: Pick<
    TrajectorySummary,
    | 'format'
    | 'formatVersion'
    | 'objectName'
    | 'objectId'
    | 'originator'
    | 'creationDate'
    | 'center'
    | 'frame'
    | 'timeSystem'
    | 'stateCount'
    | 'segments'
    | 'comments'
    | 'bodies'
    | 'interpolationErrorKm'
    | 'nodeSpacingS'
  >;
  /** What besides the bytes settles the path. */
  readonly choices: { readonly targetId: number | null };
}
