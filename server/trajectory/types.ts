import type { PlanetId } from '../constants/planets.ts';
import type { CsvColumns } from '../ephemeris/index.ts';
import type { Path } from './path.ts';

export interface TrajectoryRequest {
  /** Needed for tables without a centre and for kernels that know both planets; else it must agree with the file. */
  readonly planet?: PlanetId;
  /** Name to show; absent: the object's name. */
  readonly name?: string;
  readonly fileName?: string;
  /** Spacecraft of a kernel that holds several, NAIF integer code. */
  readonly targetId?: number;
  /** How to read the columns of a CSV table whose names do not say it. */
  readonly columns?: CsvColumns;
}

/** `info`: what was understood; `caution`: may matter for the dose; `warning`: the dose is probably not what is meant. */
export type NoticeSeverity = 'info' | 'caution' | 'warning';

export type NoticeCode =
  | 'barycenter'
  | 'centerAssumed'
  | 'frameAssumed'
  | 'interpolationAssumed'
  | 'degreeRounded'
  | 'degreeLowered'
  | 'leapSecondsHeld'
  | 'metresForKilometres'
  | 'velocityInconsistent'
  | 'nodeSpacingCoarse'
  | 'insidePlanet'
  | 'outsideBelts'
  | 'noClosestApproach'
  | 'closestAtBoundary'
  | 'approachesCut'
  | 'gap'
  | 'overlap'
  | 'segmentLeftOut'
  | 'otherGiantPlanet'
  | 'extrasIgnored'
  | 'sketched';

export interface TrajectoryNotice {
  readonly code: NoticeCode;
  readonly severity: NoticeSeverity;
  readonly text: string;
}

export interface SegmentSummary {
  readonly startUtc: string;
  readonly stopUtc: string;
  readonly stateCount: number;
  /** How states between the nodes are found, in words: `Hermite`, `Lagrange`, `Chebyshev (SPK type 2)`, … */
  readonly interpolation: string;
  /** Degree of the polynomial; null where the method has none of its own. */
  readonly degree: number | null;
}

export interface ClosestApproach {
  readonly utc: string;
  readonly epochTdbS: number;
  readonly radiusKm: number;
  readonly radiusPlanetRadii: number;
  /** Above the 1-bar ellipsoid along the radius. */
  readonly altitudeKm: number;
  readonly speedKmS: number;
  /** Planetocentric, body-fixed frame of the default rotation model. */
  readonly latitudeDeg: number;
  readonly eastLongitudeDeg: number;
}

export interface SpanSummary {
  readonly startUtc: string;
  readonly stopUtc: string;
  readonly startTdbS: number;
  readonly stopTdbS: number;
}

/** What was read, in the words and units of the edge. Unknown text fields are empty strings. */
export interface TrajectorySummary {
  readonly name: string;
  readonly planet: PlanetId;
  readonly format: 'oem-kvn' | 'oem-xml' | 'csv' | 'spk';
  readonly formatVersion: string;
  readonly sha256: string;
  readonly sizeBytes: number;
  readonly objectName: string;
  readonly objectId: string;
  readonly originator: string;
  readonly creationDate: string;
  readonly center: string;
  readonly frame: string;
  readonly timeSystem: string;
  readonly startUtc: string;
  readonly stopUtc: string;
  readonly stateCount: number;
  readonly segments: readonly SegmentSummary[];
  /** Where the path may be evaluated: disjoint, ascending. */
  readonly spans: readonly SpanSummary[];
  readonly gaps: readonly { readonly startUtc: string; readonly stopUtc: string; readonly durationS: number }[];
  readonly closestApproaches: readonly ClosestApproach[];
  /** Speed at infinity of the osculating two-body path at the lowest closest approach; null when bound or unknown. */
  readonly vInfKmS: number | null;
  /** Period of the same; null when unbound or unknown. */
  readonly periodS: number | null;
  /**
   * Largest leave-one-out error of the interpolation within 30 planet radii: each node against the curve through its
   * neighbours. It overstates the error between nodes. Null for kernels, whose curves are the data, and where there
   * are too few nodes.
   */
  readonly interpolationErrorKm: number | null;
  /** Smallest and largest spacing of the nodes within 30 planet radii, s; null for kernels. */
  readonly nodeSpacingS: readonly [number, number] | null;
  readonly comments: readonly string[];
  /** Bodies of a kernel, NAIF integer codes; empty for other formats. */
  readonly bodies: readonly number[];
  readonly notices: readonly TrajectoryNotice[];
  /** What was understood, in plain sentences. */
  readonly reading: readonly string[];
}

export interface TrajectoryReading {
  readonly summary: TrajectorySummary;
  readonly path: Path;
}
