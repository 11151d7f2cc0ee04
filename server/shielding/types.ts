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

/**
 * A shield is one stack; or sectors: solid-angle fractions that sum to 1, each behind its stack;
 * or a box of six walls (+x, −x, +y, −y, +z, −z) round a point inside; or an outer shield with a spot shield over the
 * part. Boxes nest through `inner`.
 */
export type ShieldInput =
  | { readonly kind: 'stack'; readonly stack: StackInput }
  | { readonly kind: 'sectors'; readonly sectors: readonly { readonly fraction: number; readonly stack: StackInput }[] }
  | { readonly kind: 'box'; readonly box: BoxInput; readonly rays?: number };

export interface BoxInput {
  /** Inner size along x, y, z, mm. */
  readonly innerSizeMm: readonly [number, number, number];
  /** Layers of the walls +x, −x, +y, −y, +z, −z, outside first. */
  readonly walls: readonly [LayerInput[], LayerInput[], LayerInput[], LayerInput[], LayerInput[], LayerInput[]];
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
