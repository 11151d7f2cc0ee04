import type { PlanetId } from '../constants/planets.ts';
import type { FieldModelId } from '../field/types.ts';
import type { EvidenceRegion } from '../flux/types.ts';

export type PhaseMode = 'published' | 'offset' | 'drawn' | 'sweep';

/** What the environment of an exposure is made of; JSON on the wire and part of every hash. */
export interface EnvironmentChoice {
  readonly fieldModelId: FieldModelId;
  readonly rotationModelId: string;
  readonly beltModelId: string;
  readonly phase: { readonly mode: PhaseMode; readonly offsetDeg?: number; readonly count?: number };
  /** Further field models that the sampling of uncertainty draws at equal odds (default: Q3 and AH5 at Uranus). */
  readonly sampledFieldModelIds?: readonly FieldModelId[];
  readonly satelliteDips?: boolean;
  readonly protonUpperBound?: boolean;
  readonly solarWindState?: 'as-encountered' | 'long-term-mean';
  /** Content of the uploaded belt table that `beltModelId` names; absent with built-in belts. */
  readonly beltTableSha256?: string;
}

/** One (field model, rotation offset) for which the path was followed. Weights of a set sum to 1. */
export interface ExposureVariant {
  readonly fieldModelId: FieldModelId;
  readonly offsetDeg: number;
  readonly weight: number;
  /** True for the variants of the chosen field model; the others serve the sampling only. */
  readonly primary: boolean;
}

/**
 * Mission-integrated spectra of one trajectory, kept apart by what the uncertainty sampling has to move separately:
 * variant (field, phase), group of passes (within 30 days, which share their time variation), and L.
 * A plain serialisable record.
 */
export interface FluenceArtefact {
  readonly inputsSha256: string;
  readonly planet: PlanetId;
  readonly beltModelId: string;
  readonly variants: readonly ExposureVariant[];
  /** Index into `variants` of the nominal case (chosen field; published or given offset, else median fluence). */
  readonly nominalVariant: number;
  readonly groups: readonly { readonly startTdbS: number; readonly stopTdbS: number }[];
  /** Shape (nL + 1,), edges of the L bins, reference radii; hold every `lBreaks` of the belt model. */
  readonly lEdges: Float64Array;
  /** Per bin: σ(L), σ₀ and side of the anchor, at the bin's geometric mean L, so that draws need no belt model. */
  readonly spread: Readonly<Record<'electron' | 'proton', LBinSpread>>;
  /** Shape (91,) / (121,): σ_E at the edges of the energy grids, decades. */
  readonly energySigmaDex: Readonly<Record<'electron' | 'proton', Float64Array>>;
  /**
   * Differential omnidirectional fluence, cm⁻² MeV⁻¹, at ELECTRON_EDGES_MEV / PROTON_EDGES_MEV,
   * index ((variant · nGroups + group) · nL + bin) · nEdges + edge.
   */
  readonly electron: Float32Array;
  readonly proton: Float32Array;
  /** Evidence region per (L bin, energy bin), index bin · nBins + energyBin. */
  readonly regions: Readonly<Record<'electron' | 'proton', readonly EvidenceRegion[]>>;
  /** Median electrons over the scaled Kennel-Petschek level at each bin's geometric mean L. */
  readonly kennelPetschekRatio?: Float64Array;
  /** Absent when no time history was kept: peak dose rates and 10 h fluences are then not assessed. */
  readonly history?: FluxHistory;
}

/**
 * Flux along the nominal variant, so that dose rates and running fluences behind any shield can be folded later.
 * Linear between samples; a gap in the path is bridged by two zero samples. At most 2000 samples.
 */
export interface FluxHistory {
  /** Shape (n,), TDB seconds past J2000, ascending. */
  readonly epochTdbS: Float64Array;
  /** Differential omnidirectional flux, cm⁻² s⁻¹ MeV⁻¹, at ELECTRON_EDGES_MEV; index sample · 91 + edge. */
  readonly electron: Float32Array;
  /** As `electron`, at PROTON_EDGES_MEV; index sample · 121 + edge. */
  readonly proton: Float32Array;
}

export interface LBinSpread {
  readonly sharedSigmaDex: number;
  readonly sigmaDex: Float64Array;
  readonly side: readonly ('anchor' | 'inside' | 'outside')[];
}
