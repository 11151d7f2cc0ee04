/** One element in a material, by mass. */
export interface Constituent {
  readonly symbol: string;
  readonly z: number;
  readonly atomicMassGPerMol: number;
  readonly massFraction: number;
}

/** Fit of the density effect: Sternheimer, Berger & Seltzer (1984), X = log10(βγ). */
export interface SternheimerFit {
  readonly a: number;
  readonly k: number;
  readonly x0: number;
  readonly x1: number;
  readonly cBar: number;
  readonly delta0: number;
}

export interface Material {
  /** For example `Al`, `Ta`, `kapton`; chemical symbols are valid ids. */
  readonly id: string;
  readonly name: string;
  readonly densityGPerCm3: number;
  readonly meanExcitationEv: number;
  readonly plasmaEv: number;
  readonly sternheimer: SternheimerFit;
  readonly constituents: readonly Constituent[];
  readonly source: string;
}
