/** Everything of one case: dose behind each shield of each option, with its spread and its make-up. */
import {
  type BinnedHistory,
  CHARGING_LIMITS,
  type FluenceSpectra,
  foldDamage,
  foldDose,
  peakDoseRate,
  transmittedPeak,
} from '../dose/index.ts';
import { formatUtc } from '../time/index.ts';
import { gyToKrad } from '../units.ts';
import type { BeltDraws } from './beltDraws.ts';
import type { CaseSampler, SampledColumn } from './caseSampler.ts';
import type { AssessedPlace } from './input.ts';
import { nodeWeights, type ReferenceSpectrum } from './nodeWeights.ts';
import { caseSpectra, evidenceShares, type NominalLeg, phaseDoses } from './nominal.ts';
import { type OtherDose, otherDoseAt, otherFluences, type PreparedSource } from './otherDose.ts';
import { percentile, sorted } from './percentiles.ts';
import { type PreparedResponse, usableResponse } from './responses.ts';
import type { ChargingResult, DoseParts, Percentiles, PhaseTreatment, ShieldDoseRow } from './result.ts';
import { spreadSources } from './spreadSources.ts';

/** What a case brings to its rows. */
export interface PreparedCase {
  readonly caseId: string;
  readonly legs: readonly NominalLeg[];
  readonly sampler: CaseSampler;
  readonly reference: { readonly electron: ReferenceSpectrum; readonly proton: ReferenceSpectrum };
  readonly belts: readonly BeltDraws[];
  readonly histories: readonly (BinnedHistory | null)[];
  readonly sources: readonly PreparedSource[];
}

/** Drawn doses behind one response in one case: shared by every place that has this response. */
interface ShieldSamples {
  /** Ascending, Gy, belts only. */
  readonly jointGy: Float64Array;
  /** Ascending, Gy, belts only, every pass at its worst phase; null unless the study asks for it. */
  readonly worstGy: Float64Array | null;
  readonly common: ShieldCommon;
}

/** What does not depend on the place, only on the response. */
interface ShieldCommon {
  readonly nominal: ReturnType<typeof foldDose>;
  readonly byEvidence: NonNullable<ShieldDoseRow['byEvidence']>;
  readonly byLegGy: readonly number[];
  readonly phase: ReturnType<typeof phaseDoses>;
  readonly byFieldModel: ShieldDoseRow['byFieldModel'];
  readonly uncertainty: ShieldDoseRow['uncertainty'];
  readonly peakDoseRate: ShieldDoseRow['peakDoseRate'];
  readonly charging: ChargingResult;
}

/** Draws the doses behind many responses at once. */
export function sampleShields(
  prepared: PreparedCase,
  responses: readonly PreparedResponse[],
  draws: number,
  phaseTreatment: PhaseTreatment,
): Map<string, ShieldSamples> {
  const spectra = caseSpectra(prepared.legs);
  const nominals = responses.map(({ response }) => foldDose(spectra, response));
  const columns = responses.map((response, i) => column(prepared, response, nominals[i]));
  const joint = prepared.sampler.sample(columns, draws);
  const phases = responses.map(({ response }) => phaseDoses(prepared.legs, response));
  const worst = phaseTreatment === 'worst' ? sampleWorst(prepared, columns, phases, draws) : null;
  const out = new Map<string, ShieldSamples>();
  responses.forEach(({ response, errorDeviates }, i) => {
    const { legs } = prepared;
    out.set(response.sha256, {
      jointGy: sorted(joint.doses[i]),
      worstGy: worst === null ? null : sorted(worst[i]),
      common: {
        nominal: nominals[i],
        byEvidence: evidenceShares(legs, response),
        byLegGy: legs.map((leg) => leg.repetitions * foldDose(leg.nominal, response).totalGy),
        phase: phases[i],
        byFieldModel: byFieldModel(legs, response),
        uncertainty: spreadSources(
          joint.doses[i],
          prepared.belts,
          joint.record,
          columns[i].errorDeviates === null ? null : errorDeviates,
        ),
        peakDoseRate: peakRate(prepared, response),
        charging: charging(prepared, response),
      },
    });
  });
  return out;
}

function column(
  prepared: PreparedCase,
  { response, electronGyCm2, errorDeviates }: PreparedResponse,
  nominal: ReturnType<typeof foldDose>,
): SampledColumn {
  const statisticalErrorRel = nominal.totalGy > 0 ? nominal.sigmaGy / nominal.totalGy : 0;
  return {
    weights: {
      electron: nodeWeights(prepared.reference.electron, electronGyCm2),
      proton: nodeWeights(prepared.reference.proton, response.proton.doseGyCm2),
    },
    statisticalErrorRel,
    errorDeviates: statisticalErrorRel > 0 ? errorDeviates : null,
    constantGy: 0,
  };
}

/** Responses may differ in their worst phases: one run for each set of offsets that occurs. */
function sampleWorst(
  { sampler }: PreparedCase,
  columns: readonly SampledColumn[],
  phases: readonly ReturnType<typeof phaseDoses>[],
  draws: number,
): Float64Array[] {
  const out: Float64Array[] = new Array(columns.length);
  const groups = new Map<string, number[]>();
  phases.forEach(({ worstOffsetsDeg }, i) => {
    const key = worstOffsetsDeg.join(' ');
    groups.set(key, [...(groups.get(key) ?? []), i]);
  });
  for (const members of groups.values()) {
    const { doses } = sampler.sample(
      members.map((i) => columns[i]),
      draws,
      phases[members[0]].worstOffsetsDeg,
    );
    members.forEach((i, k) => {
      out[i] = doses[k];
    });
  }
  return out;
}

function byFieldModel(
  legs: readonly NominalLeg[],
  response: PreparedResponse['response'],
): { fieldModelId: string; doseKradSi: number }[] {
  const models = legs[0].spectra.byFieldModel.map(({ fieldModelId }) => fieldModelId);
  if (legs.some(({ spectra }) => spectra.byFieldModel.length !== models.length)) return [];
  return models.map((fieldModelId, model) => ({
    fieldModelId,
    doseKradSi: gyToKrad(
      legs.reduce(
        (sum, leg) => sum + leg.repetitions * foldDose(leg.spectra.byFieldModel[model].spectra, response).totalGy,
        0,
      ),
    ),
  }));
}

function peakRate(prepared: PreparedCase, response: PreparedResponse['response']): ShieldDoseRow['peakDoseRate'] {
  let best: ShieldDoseRow['peakDoseRate'] = null;
  prepared.histories.forEach((history, leg) => {
    if (history === null) return;
    const peak = peakDoseRate(history, response);
    const radSiPerS = peak.doseRateGyPerS * RAD_PER_GY;
    if (best === null || radSiPerS > best.radSiPerS) {
      best = {
        radSiPerS,
        utc: formatUtc(peak.epochTdbS, 0),
        trajectoryId: prepared.legs[leg].trajectory.trajectoryId,
      };
    }
  });
  return best;
}

const RAD_PER_GY = 100;

function charging(prepared: PreparedCase, response: PreparedResponse['response']): ChargingResult {
  const limits = {
    currentLimitPaPerCm2: CHARGING_LIMITS.currentPaPerCm2,
    coldCurrentLimitPaPerCm2: CHARGING_LIMITS.coldCurrentPaPerCm2,
    fluence10hLimitPerCm2: CHARGING_LIMITS.windowFluencePerCm2,
  };
  const peaks = prepared.histories.flatMap((history) =>
    history === null ? [] : [transmittedPeak(history, response, CHARGING_LIMITS.windowS)],
  );
  if (peaks.length < prepared.legs.length) {
    return {
      peakCurrentPaPerCm2: null,
      peakUtc: null,
      fluence10hPerCm2: null,
      ...limits,
      currentFlag: 'unknown',
      fluenceFlag: 'unknown',
    };
  }
  const peak = peaks.reduce((best, one) => (one.currentPaPerCm2 > best.currentPaPerCm2 ? one : best));
  const fluence10hPerCm2 = Math.max(...peaks.map(({ windowFluencePerCm2 }) => windowFluencePerCm2));
  const current = peak.currentPaPerCm2;
  return {
    peakCurrentPaPerCm2: current,
    peakUtc: formatUtc(peak.epochTdbS, 0),
    fluence10hPerCm2,
    ...limits,
    currentFlag:
      current > limits.currentLimitPaPerCm2
        ? 'above'
        : current > limits.coldCurrentLimitPaPerCm2
          ? 'aboveCold'
          : 'below',
    fluenceFlag: fluence10hPerCm2 > limits.fluence10hLimitPerCm2 ? 'above' : 'below',
  };
}

/** One place of one option in one case, ready for margins. */
export interface PlaceDose {
  readonly row: ShieldDoseRow;
  readonly samples: ShieldSamples | null;
  readonly other: OtherDose | null;
  /** True when an other source could not be read here, so that its dose is unknown. */
  readonly refusedBySource: boolean;
}

/** The row of one place; a place without a usable response comes back with the reason and no numbers. */
export function placeDose(
  prepared: PreparedCase,
  optionId: string,
  place: AssessedPlace,
  samples: ReadonlyMap<string, ShieldSamples>,
  verdictPercentile: number,
): PlaceDose {
  const usable = usableResponse(place);
  if ('refused' in usable) return notAssessed(prepared.caseId, optionId, place.placeId, usable.refused, false);
  const { response } = usable;
  const shield = samples.get(response.sha256);
  if (shield === undefined) throw new TypeError(`no draws for response ${response.sha256}`);
  const other = otherDoseAt(prepared.sources, prepared.caseId, place, response);
  if (other.refused !== null) return notAssessed(prepared.caseId, optionId, place.placeId, other.refused, true);
  const { common, jointGy, worstGy } = shield;
  const { nominal, phase } = common;
  const at = (percent: number): number => gyToKrad(percentile(jointGy, percent) + other.totalGy);
  const band: Percentiles = { p05: at(5), p50: at(50), p95: at(95) };
  const row: ShieldDoseRow = {
    caseId: prepared.caseId,
    optionId,
    placeId: place.placeId,
    notAssessed: null,
    doseKradSi: doseParts(nominal, other.totalGy),
    band,
    doseAtVerdictKradSi: gyToKrad(percentile(worstGy ?? jointGy, verdictPercentile) + other.totalGy),
    statisticalErrorRel: nominal.totalGy > 0 ? nominal.sigmaGy / nominal.totalGy : 0,
    extrapolatedFraction: extrapolatedShare(common, other.totalGy),
    byEvidence: common.byEvidence,
    byLeg: prepared.legs.map(({ trajectory, repetitions }, leg) => ({
      trajectoryId: trajectory.trajectoryId,
      repetitions,
      doseKradSi: gyToKrad(common.byLegGy[leg]),
    })),
    bySource: other.bySource.map(({ name, phase: during, doseGy }) => ({
      name,
      phase: during,
      doseKradSi: gyToKrad(doseGy),
    })),
    byPhase: phase.byPhase.map(({ offsetDeg, doseGy }) => ({ offsetDeg, doseKradSi: gyToKrad(doseGy) })),
    worstPhase: { offsetDeg: phase.worst.offsetDeg, doseKradSi: gyToKrad(phase.worst.doseGy) },
    byFieldModel: common.byFieldModel,
    uncertainty: common.uncertainty,
    peakDoseRate: common.peakDoseRate,
    damage: foldDamage(allFluences(prepared), response),
    charging: common.charging,
    otherTargets: (place.otherTargets ?? []).map((target) => ({
      targetMaterialId: target.targetMaterialId,
      doseKrad: doseParts(foldDose(caseSpectra(prepared.legs), target), otherFluenceGy(prepared, target)),
    })),
  };
  return { row, samples: shield, other, refusedBySource: false };
}

/** Extrapolated belts over the whole dose: other sources rest on their own evidence. */
function extrapolatedShare({ byEvidence, nominal }: ShieldCommon, otherGy: number): number {
  const total = nominal.totalGy + otherGy;
  return total > 0 ? (byEvidence.extrapolated * nominal.totalGy) / total : 0;
}

/** Belts and the other sources that are given as fluence. */
function allFluences(prepared: PreparedCase): FluenceSpectra {
  const sum = caseSpectra(prepared.legs);
  for (const more of otherFluences(prepared.sources, prepared.caseId)) {
    for (let i = 0; i < sum.electronPerCm2.length; i++) sum.electronPerCm2[i] += more.electronPerCm2[i];
    for (let i = 0; i < sum.protonPerCm2.length; i++) sum.protonPerCm2[i] += more.protonPerCm2[i];
  }
  return sum;
}

/** Other doses in another target material: only fluences can be carried there, doses in silicon cannot. */
function otherFluenceGy(prepared: PreparedCase, response: PreparedResponse['response']): number {
  return otherFluences(prepared.sources, prepared.caseId).reduce(
    (sum, spectra) => sum + foldDose(spectra, response).totalGy,
    0,
  );
}

function doseParts(dose: ReturnType<typeof foldDose>, otherGy: number): DoseParts {
  return {
    electron: gyToKrad(dose.electronGy),
    bremsstrahlung: gyToKrad(dose.bremsstrahlungGy),
    proton: gyToKrad(dose.protonGy),
    other: gyToKrad(otherGy),
    total: gyToKrad(dose.totalGy + otherGy),
  };
}

function notAssessed(
  caseId: string,
  optionId: string,
  placeId: string,
  reason: string,
  refusedBySource: boolean,
): PlaceDose {
  return {
    row: {
      caseId,
      optionId,
      placeId,
      notAssessed: reason,
      doseKradSi: null,
      band: null,
      doseAtVerdictKradSi: null,
      statisticalErrorRel: null,
      extrapolatedFraction: null,
      byEvidence: null,
      byLeg: [],
      bySource: [],
      byPhase: [],
      worstPhase: null,
      byFieldModel: [],
      uncertainty: [],
      peakDoseRate: null,
      damage: null,
      charging: null,
      otherTargets: [],
    },
    samples: null,
    other: null,
    refusedBySource,
  };
}
