export type { Path, PathSpan } from './path.ts';
export { readTrajectory } from './readTrajectory.ts';
export type {
  ClosestApproach,
  NoticeCode,
  NoticeSeverity,
  SegmentSummary,
  SpanSummary,
  TrajectoryNotice,
  TrajectoryReading,
  TrajectoryRequest,
  TrajectorySummary,
} from './types.ts';
