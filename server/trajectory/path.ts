import type { PlanetId } from '../constants/planets.ts';

/** One stretch of time in which the path may be evaluated. Nothing is ever interpolated across two spans. */
export interface PathSpan {
  readonly startTdbS: number;
  readonly stopTdbS: number;
}

/**
 * A checked trajectory relative to the planet's centre: what every later room reads, whatever file it came from.
 * Spans are disjoint (they may share an endpoint) and ascending; gaps between them count as no exposure.
 */
export interface Path {
  readonly planet: PlanetId;
  readonly spans: readonly PathSpan[];
  /** Content address of what defines the path: source bytes, chosen target, column mapping. */
  readonly inputsSha256: string;
  /**
   * State at an epoch inside a span.
   *
   * @param epochTdbS - TDB seconds past J2000
   * @param out - shape (6,): position km and velocity km/s, ICRF axes, planet centre; overwritten
   * @throws {AppError} TRAJECTORY_OUTSIDE_SPAN when no span holds the epoch
   */
  stateInto(epochTdbS: number, out: Float64Array): Float64Array;
}
