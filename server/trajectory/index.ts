export type { Path, PathSpan } from './path.ts';
export { readTrajectory } from './readTrajectory.ts';
export { type SampledPath, sampledOem } from './sampledOem.ts';
export type { SketchedTrajectory } from './sketchCommon.ts';
export {
  type BPlaneFlybySketch,
  type ElementFlybySketch,
  type FlybySketch,
  sketchFlyby,
} from './sketchFlyby.ts';
export { type OrbitSketch, sketchOrbit } from './sketchOrbit.ts';
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
export { type OemDocument, type OemSegment, writeOem } from './writeOem.ts';
