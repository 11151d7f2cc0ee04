/** Nominal doses: median belts, folded exactly, by leg, phase, field model and evidence. */
import {
  addVariantInto,
  ELECTRON_BINS,
  type FluenceSpectra,
  foldDose,
  nominalEdges,
  PROTON_BINS,
  spectraByEvidence,
  spectraFromEdges,
  type VariantWeights,
} from '../dose/index.ts';
import { EVIDENCE_REGIONS, type EvidenceRegion } from '../flux/types.ts';
import { edgesMeV, type Species } from '../numeric/spectrumGrid.ts';
import type { ShieldResponse } from '../shielding/types.ts';
import type { AssessedTrajectory } from './input.ts';
import { independentPhases, type Leg, phaseDistributions } from './schedule.ts';

/** Spectra of one trajectory that every fold of it needs, made once. */
export interface TrajectorySpectra {
  readonly trajectory: AssessedTrajectory;
  /** Nominal variant alone: what one pass is expected to bring. */
  readonly onePass: FluenceSpectra;
  /** Mean over the phases of the chosen field model: what each of many passes brings on average. */
  readonly phaseMean: FluenceSpectra;
  /** Variants of the chosen field model by ascending offset, median belts. */
  readonly byPhase: readonly { readonly offsetDeg: number; readonly spectra: FluenceSpectra }[];
  /** Phase mean of every field model. */
  readonly byFieldModel: readonly { readonly fieldModelId: string; readonly spectra: FluenceSpectra }[];
  readonly onePassEvidence: Readonly<Record<EvidenceRegion, FluenceSpectra>>;
  readonly phaseMeanEvidence: Readonly<Record<EvidenceRegion, FluenceSpectra>>;
  /** Weighted mean of all variants, at the edges: positive wherever any draw may be. */
  readonly referenceEdges: { readonly electron: Float64Array; readonly proton: Float64Array };
}

export function trajectorySpectra(trajectory: AssessedTrajectory): TrajectorySpectra {
  const { fluence } = trajectory;
  const onePassWeights: VariantWeights = [{ variant: fluence.nominalVariant, weight: 1 }];
  const distributions = phaseDistributions(fluence);
  const chosen = distributions[0];
  const weightsOf = (distribution: typeof chosen): VariantWeights =>
    distribution.variants.map((variant, i) => ({
      variant,
      weight: distribution.cumulative[i] - (i === 0 ? 0 : distribution.cumulative[i - 1]),
    }));
  const phaseWeights = weightsOf(chosen);
  const single = phaseWeights.length === 1 && phaseWeights[0].variant === fluence.nominalVariant;
  const onePassEvidence = spectraByEvidence(fluence, onePassWeights);
  const reference = (species: 'electron' | 'proton'): Float64Array => {
    const out = new Float64Array(edgesMeV(species).length);
    const weight = 1 / fluence.variants.length;
    for (let variant = 0; variant < fluence.variants.length; variant++) {
      addVariantInto(fluence, variant, species, weight, out);
    }
    return out;
  };
  return {
    trajectory,
    onePass: spectraOf(trajectory, onePassWeights),
    phaseMean: spectraOf(trajectory, phaseWeights),
    byPhase: chosen.variants.map((variant, i) => ({
      offsetDeg: chosen.offsetsDeg[i],
      spectra: spectraOf(trajectory, [{ variant, weight: 1 }]),
    })),
    byFieldModel: distributions.map((distribution) => ({
      fieldModelId: distribution.fieldModelId,
      spectra: spectraOf(trajectory, weightsOf(distribution)),
    })),
    onePassEvidence,
    phaseMeanEvidence: single ? onePassEvidence : spectraByEvidence(fluence, phaseWeights),
    referenceEdges: { electron: reference('electron'), proton: reference('proton') },
  };
}

/** Nominal differential fluence of one pass at the edges of a grid, cm⁻² MeV⁻¹. */
export function nominalEdgesOf({ fluence }: AssessedTrajectory, species: Species): Float64Array {
  return nominalEdges(fluence, [{ variant: fluence.nominalVariant, weight: 1 }], species);
}

function spectraOf({ fluence }: AssessedTrajectory, weights: VariantWeights): FluenceSpectra {
  return spectraFromEdges(nominalEdges(fluence, weights, 'electron'), nominalEdges(fluence, weights, 'proton'));
}

/** A leg with its spectra: several flights at independent phases average over them, one flight takes its own. */
export interface NominalLeg extends Leg {
  readonly spectra: TrajectorySpectra;
  readonly nominal: FluenceSpectra;
  readonly evidence: Readonly<Record<EvidenceRegion, FluenceSpectra>>;
}

export function nominalLeg(leg: Leg, spectra: TrajectorySpectra): NominalLeg {
  const mean = leg.repetitions > 1 && independentPhases(leg.trajectory);
  return {
    ...leg,
    spectra,
    nominal: mean ? spectra.phaseMean : spectra.onePass,
    evidence: mean ? spectra.phaseMeanEvidence : spectra.onePassEvidence,
  };
}

/** Nominal belt spectra of a whole case: legs times repetitions. */
export function caseSpectra(legs: readonly NominalLeg[]): FluenceSpectra {
  const electronPerCm2 = new Float64Array(ELECTRON_BINS);
  const protonPerCm2 = new Float64Array(PROTON_BINS);
  for (const { nominal, repetitions } of legs) {
    for (let i = 0; i < ELECTRON_BINS; i++) electronPerCm2[i] += repetitions * nominal.electronPerCm2[i];
    for (let i = 0; i < PROTON_BINS; i++) protonPerCm2[i] += repetitions * nominal.protonPerCm2[i];
  }
  return { electronPerCm2, protonPerCm2 };
}

/** Shares of the nominal belt dose by evidence; they sum to 1, or are all 0 where there is no dose. */
export function evidenceShares(legs: readonly NominalLeg[], response: ShieldResponse): Record<EvidenceRegion, number> {
  const doses = EVIDENCE_REGIONS.map((region) =>
    legs.reduce((sum, leg) => sum + leg.repetitions * foldDose(leg.evidence[region], response).totalGy, 0),
  );
  const total = doses.reduce((sum, dose) => sum + dose, 0);
  return Object.fromEntries(EVIDENCE_REGIONS.map((region, i) => [region, total > 0 ? doses[i] / total : 0])) as Record<
    EvidenceRegion,
    number
  >;
}

interface PhaseDoses {
  /** Dose with every flight of every leg at the same offset, over the offsets of the legs; empty for a single one. */
  readonly byPhase: readonly { readonly offsetDeg: number; readonly doseGy: number }[];
  /** Every leg at its own worst offset; the offset named is that of the leg that brings most. */
  readonly worst: { readonly offsetDeg: number; readonly doseGy: number };
  /** Worst offset of each leg, degrees. */
  readonly worstOffsetsDeg: readonly number[];
}

/** Nominal belt dose against the rotation phase, in the chosen field model. */
export function phaseDoses(legs: readonly NominalLeg[], response: ShieldResponse): PhaseDoses {
  const curves = legs.map(({ spectra, repetitions }) =>
    spectra.byPhase.map(({ offsetDeg, spectra: one }) => ({
      offsetDeg,
      doseGy: repetitions * foldDose(one, response).totalGy,
    })),
  );
  const peaks = curves.map((curve) => curve.reduce((best, point) => (point.doseGy > best.doseGy ? point : best)));
  const leader = peaks.reduce((best, point) => (point.doseGy > best.doseGy ? point : best));
  const offsets = [
    ...new Set(curves.filter((curve) => curve.length > 1).flatMap((curve) => curve.map((p) => p.offsetDeg))),
  ].toSorted((a, b) => a - b);
  return {
    byPhase: offsets.map((offsetDeg) => ({
      offsetDeg,
      doseGy: curves.reduce((sum, curve) => sum + atOffset(curve, offsetDeg), 0),
    })),
    worst: { offsetDeg: leader.offsetDeg, doseGy: peaks.reduce((sum, point) => sum + point.doseGy, 0) },
    worstOffsetsDeg: peaks.map((point) => point.offsetDeg),
  };
}

/** Dose of one leg at an offset, straight between its own offsets round the circle. */
function atOffset(curve: readonly { offsetDeg: number; doseGy: number }[], offsetDeg: number): number {
  const n = curve.length;
  for (let i = 0; i < n; i++) {
    const a = curve[i];
    const b = curve[(i + 1) % n];
    if (a.offsetDeg === offsetDeg) return a.doseGy;
    const gap = n === 1 ? 360 : (b.offsetDeg - a.offsetDeg + 360) % 360;
    const into = (((offsetDeg - a.offsetDeg) % 360) + 360) % 360;
    if (into < gap) return a.doseGy + ((b.doseGy - a.doseGy) * into) / gap;
  }
  return curve[0].doseGy;
}
