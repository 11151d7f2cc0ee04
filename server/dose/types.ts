import type { ShieldResponse } from '../shielding/types.ts';

/** Bin-integrated fluence on the two energy grids: what a response is folded with. */
export interface FluenceSpectra {
  /** Shape (90,), cm⁻² per bin of ELECTRON_EDGES_MEV, omnidirectional. */
  readonly electronPerCm2: Float64Array;
  /** Shape (120,), cm⁻² per bin of PROTON_EDGES_MEV, omnidirectional. */
  readonly protonPerCm2: Float64Array;
}

/** Dose in the target of one response, Gy of the target material. */
export interface FoldedDose {
  readonly electronGy: number;
  readonly bremsstrahlungGy: number;
  readonly protonGy: number;
  readonly totalGy: number;
  /** 1 σ statistical error of `totalGy` from the response, bins independent, Gy. */
  readonly sigmaGy: number;
}

/**
 * Responses of one material against depth, on an ascending grid: what makes a dose-depth curve of any fluence.
 * `materialId` and `geometry` say what the depth is made of; target and backing are those of the responses.
 */
export interface DoseDepthTable {
  readonly geometry: 'slab' | 'sphere';
  readonly materialId: string;
  readonly densityGPerCm3: number;
  readonly targetText: string;
  /** Shape (n,), mm, ascending, n ≥ 2. */
  readonly depthsMm: readonly number[];
  readonly responses: readonly ShieldResponse[];
}

/** A dose that does not come from the belts, as the project enters it. */
export interface OtherSourceInput {
  readonly name: string;
  /** Citation or origin, never empty. */
  readonly source: string;
  /** Mission phase it belongs to, for example `cruise`. */
  readonly phase: string;
  /** Cases it is added to; absent means all. */
  readonly caseIds?: readonly string[];
  /** One dose at every part, behind whatever shield: krad(Si). */
  readonly doseKradSi?: number;
  /** Dose behind aluminium, read log-log, refused outside its span. */
  readonly doseDepth?: { readonly depthsMm: readonly number[]; readonly doseKradSi: readonly number[] };
  /** A fluence carried through the same responses as the belts. */
  readonly fluence?: OtherFluenceInput;
}

export interface OtherFluenceInput {
  readonly species: 'electron' | 'proton';
  /** Ascending, MeV; nothing is assumed outside the span. */
  readonly energiesMeV: readonly number[];
  /** Omnidirectional, 4π-integrated; exactly one of the two. */
  readonly differentialPerCm2MeV?: readonly number[];
  readonly integralPerCm2?: readonly number[];
  /** True for the built-in examples, which are labelled so wherever they show. */
  readonly example?: boolean;
}
