import type { PlanetId } from '../constants/planets.ts';
import type { Species } from '../numeric/spectrumGrid.ts';

/** How far a value rests on measurement: regions in (L, E), see design of the belt model. */
export type EvidenceRegion = 'anchored' | 'sampled' | 'sampledQualitative' | 'extrapolated';
export const EVIDENCE_REGIONS: readonly EvidenceRegion[] = [
  'anchored',
  'sampled',
  'sampledQualitative',
  'extrapolated',
];

/** Spread of the belt at one L, in decades (1 σ of log₁₀ j), and which side of the anchor it lies on. */
export interface BeltSpread {
  /** σ(L), decades. */
  readonly sigmaDex: number;
  readonly side: 'anchor' | 'inside' | 'outside';
}

/**
 * A trapped-particle model: medians and spreads. Intensities are directional differential,
 * cm⁻² s⁻¹ sr⁻¹ MeV⁻¹; fluxes omnidirectional differential, cm⁻² s⁻¹ MeV⁻¹. L in reference radii of the field
 * model the belts were written in, used unscaled.
 */
export interface BeltModel {
  readonly id: string;
  readonly planet: PlanetId;
  readonly label: string;
  readonly source: string;
  readonly species: readonly Species[];
  /** L outside [lMin, lMax] has no particles in this model. */
  readonly lMin: number;
  readonly lMax: number;
  /** L at which an evidence region or the side of the anchor changes, ascending: edges that any L binning must keep. */
  readonly lBreaks: readonly number[];
  directional(species: Species, energyMeV: number, lShell: number, sinSquaredEquatorialPitch: number): number;
  /**
   * J(E) = 4π ∫₀^{π/2} j(E, α_eq(α), L) sin α dα with sin²α_eq = (B_min/B) sin²α, zero inside the loss cone.
   *
   * @param energiesMeV - shape (n,), MeV
   * @param out - shape (n,), cm⁻² s⁻¹ MeV⁻¹; overwritten
   */
  omnidirectionalInto(
    species: Species,
    lShell: number,
    bNt: number,
    bMinNt: number,
    bLossNt: number,
    energiesMeV: Float64Array,
    out: Float64Array,
  ): Float64Array;
  region(species: Species, lShell: number, energyMeV: number): EvidenceRegion;
  spread(species: Species, lShell: number): BeltSpread;
  /** σ₀: the spread shared by all L, decades. */
  sharedSigmaDex(species: Species): number;
  /** σ_E(E), decades, interpolated in ln E. */
  energySigmaDex(species: Species, energyMeV: number): number;
}
