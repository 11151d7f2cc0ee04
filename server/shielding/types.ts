/** One layer as entered: exactly one of the three thicknesses. */
export interface LayerInput {
  readonly materialId: string;
  readonly thicknessMm?: number;
  readonly thicknessMil?: number;
  readonly arealDensityGPerCm2?: number;
}

export type StackGeometry = 'slab' | 'sphere' | 'shell';
export type Backing = 'none' | 'same';

/** Layers outside first. `shell` needs `innerRadiusMm`; `backing` applies to slabs. */
export interface StackInput {
  readonly geometry: StackGeometry;
  readonly innerRadiusMm?: number;
  readonly backing?: Backing;
  readonly layers: readonly LayerInput[];
}

/** Layers right over the part, inside whatever stands round it, outside first. */
export interface SpotShield {
  readonly layers: readonly LayerInput[];
  /** Share of all directions that it covers, default 1: independent of what lies outside it. */
  readonly coveredFraction?: number;
  /** For its mass alone. */
  readonly areaM2?: number;
}

export interface Sector {
  readonly name?: string;
  /** Share of 4π; all shares sum to 1. */
  readonly fraction: number;
  readonly stack: StackInput;
}

/** Whether a ray through a wall counts with its slant path (solid sphere) or with the wall's own thickness (hollow shell). */
export type PathRule = 'slant' | 'minimum';

/**
 * A shield is one stack; or sectors: solid-angle fractions that sum to 1, each behind its stack;
 * or a box of six walls (+x, −x, +y, −y, +z, −z) round a point inside. Boxes nest through `inner`. A spot shield may lie
 * over the part in each.
 */
export type ShieldInput =
  | { readonly kind: 'stack'; readonly stack: StackInput; readonly spot?: SpotShield }
  | { readonly kind: 'sectors'; readonly sectors: readonly Sector[]; readonly spot?: SpotShield }
  | {
      readonly kind: 'box';
      readonly box: BoxInput;
      /** Rays to begin with; doubled until the dose moves by less than 1 %. */
      readonly rays?: number;
      /** Default `slant`. */
      readonly pathRule?: PathRule;
      readonly spot?: SpotShield;
    };

export interface BoxInput {
  /** Inner size along x, y, z, mm. */
  readonly innerSizeMm: readonly [number, number, number];
  /** Six walls: layers of +x, −x, +y, −y, +z, −z, outside first; a wall without layers is open. */
  readonly walls: readonly (readonly LayerInput[])[];
  /** Where the part (or the centre of the inner box) sits, mm from the centre of the inner volume. */
  readonly positionMm: readonly [number, number, number];
  readonly inner?: BoxInput;
}

export type EffortClass = 'standard' | 'fine';
export type TargetMaterialId = 'Si' | 'SiO2' | 'GaAs';

/**
 * Response of a shield, per unit omnidirectional fluence (1 cm⁻², 4π-integrated, isotropic), averaged over each bin of
 * ELECTRON_EDGES_MEV (90) and PROTON_EDGES_MEV (120). Doses in Gy cm² in the target. A plain serialisable record.
 */
export interface ShieldResponse {
  readonly sha256: string;
  readonly engineVersion: string;
  readonly effort: EffortClass;
  /** Largest relative standard error of the dose among the reference spectra. */
  readonly referenceErrorRel: number;
  readonly targetMaterialId: TargetMaterialId;
  /** One line for the report: geometry, target size, backing, and how slant paths were treated. */
  readonly description: string;
  readonly electron: {
    /** Energy deposits without a photon ancestor. */
    readonly doseGyCm2: Float64Array;
    readonly doseSigmaGyCm2: Float64Array;
    /** Energy deposits with a photon ancestor. */
    readonly bremsstrahlungGyCm2: Float64Array;
    readonly bremsstrahlungSigmaGyCm2: Float64Array;
    /** Electrons per cm² (one-way current) behind the shield per unit fluence, dimensionless. */
    readonly transmitted: Float64Array;
    readonly transmittedSigma: Float64Array;
    /** Displacement damage dose in silicon, MeV/g per cm⁻². */
    readonly damageMeVCm2PerG: Float64Array;
  };
  readonly proton: {
    readonly doseGyCm2: Float64Array;
    readonly transmitted: Float64Array;
    readonly damageMeVCm2PerG: Float64Array;
  };
  readonly notices: readonly string[];
}
