import type { PlanetId } from '../constants/planets.ts';

export type FieldModelId =
  | 'uranus-q3'
  | 'uranus-ah5'
  | 'uranus-otd'
  | 'uranus-dipole'
  | 'neptune-o8'
  | 'neptune-otd'
  | 'neptune-dipole';

/**
 * A static internal field. Frame: body-fixed (ULS, NLS), right-handed, z along the angular-momentum pole.
 * All lengths in `referenceRadiusKm` of this very model (they differ: 25600, 25559, 24765 km), field in nT.
 */
export interface FieldModel {
  readonly id: FieldModelId;
  readonly planet: PlanetId;
  readonly label: string;
  readonly source: string;
  readonly referenceRadiusKm: number;
  /** M = sqrt(g10² + g11² + h11²), nT·a³: the moment that goes into L. */
  readonly dipoleMomentNt: number;
  /** Shape (3,), unit: the dipole axis (direction of the moment that points to magnetic latitude +90°). */
  readonly dipoleAxis: Float64Array;
  /**
   * @param x,y,z - position in reference radii
   * @param out - shape (3,), nT; overwritten
   */
  fieldInto(x: number, y: number, z: number, out: Float64Array): Float64Array;
}

/** Why a locally mirroring particle is not trapped there; null when it is. */
export type UntrappedReason = 'open' | 'loss' | null;

/** Magnetic coordinates of one point, for the particle that mirrors there. Reused between calls. */
export interface MagneticLabel {
  /** |B| at the point, nT. */
  bNt: number;
  /** Smallest |B| between the mirror points, nT; NaN on open lines. */
  bMinNt: number;
  /** McIlwain's L in reference radii; NaN on open lines. */
  lShell: number;
  /** Largest mirror field that the drift shell keeps above the atmosphere, nT; loss cone sin²α = B / B_loss. */
  bLossNt: number;
  reason: UntrappedReason;
}

/** Turns points into magnetic coordinates, by tracing each or by interpolating a map of the same model. */
export interface MagneticLabeller {
  readonly model: FieldModel;
  /** How: 'traced' or 'map', printed in the provenance. */
  readonly method: 'traced' | 'map';
  /** Content address of what the map was made from; absent when traced. */
  readonly mapKey?: string;
  labelInto(x: number, y: number, z: number, out: MagneticLabel): MagneticLabel;
}
