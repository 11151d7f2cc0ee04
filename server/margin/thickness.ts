/** How thick a layer must be for a dose or a margin, with as few shield responses as that takes. */
import { checkOtherSource } from '../dose/index.ts';
import { AppError } from '../errors.ts';
import type { LayerInput, ShieldResponse, StackInput } from '../shielding/types.ts';
import { gyToKrad } from '../units.ts';
import { type PreparedCase, sampleShields } from './caseRows.ts';
import { MAX_DRAWS, MIN_DRAWS } from './checkInput.ts';
import type { PartInput } from './input.ts';
import { otherDoseAt } from './otherDose.ts';
import { checkParts, preparePart } from './parts.ts';
import { percentile } from './percentiles.ts';
import { type CaseInput, prepareCases } from './prepareCases.ts';
import { prepareResponse } from './responses.ts';
import type { PhaseTreatment } from './result.ts';
import { threeDigits } from './text.ts';

/** The dose at the thickness returned lies within this of the target, relative. */
const DOSE_TOLERANCE_REL = 0.01;
/** Aim inside the tolerance, so that rounding on the way to a drawing does not leave it. */
const AIM_REL = 0.5 * DOSE_TOLERANCE_REL;
/** A bracket narrower than this cannot be told apart by responses that carry statistical error. */
const NARROWEST_BRACKET = 1.001;
const MAX_EVALUATIONS = 30;

export interface ThicknessCandidate {
  readonly name: string;
  readonly stack: StackInput;
  /** Index of the layer whose thickness is sought. */
  readonly layerIndex: number;
}

export interface ThicknessInput extends CaseInput {
  /** A dose at most, or margins of at least the required ones for these parts (they all sit behind this shield). */
  readonly target:
    | { readonly doseKradSi: number }
    | { readonly parts: readonly PartInput[]; readonly requiredRdm: number };
  /** 50 to 99.9, or `nominal` for the dose of the median belts. */
  readonly percentile: number | 'nominal';
  readonly phaseTreatment: PhaseTreatment;
  readonly candidates: readonly ThicknessCandidate[];
  readonly minimumMm: number;
  readonly maximumMm: number;
}

/** What the solver asks of the rooms that know shields. */
export interface ThicknessTools {
  respond(stack: StackInput): Promise<ShieldResponse>;
  /** Mass of the whole stack over the area or round the volume it protects, kg; null when neither is known. */
  massKg(stack: StackInput): number | null;
  /** Aluminium of the same areal density, mm, for other sources given against depth. */
  aluminiumEquivalentMm(stack: StackInput): number;
  readonly signal?: AbortSignal;
}

export interface ThicknessSolution {
  readonly name: string;
  readonly status: 'solved' | 'metAtThinnest' | 'notMetAtThickest';
  readonly thicknessMm: number;
  readonly stack: StackInput;
  readonly massKg: number | null;
  /** Highest dose over the cases at that thickness. */
  readonly doseKradSi: number;
  readonly drivingCaseId: string;
  readonly statisticalErrorRel: number;
  /** Every thickness that was tried, in order. */
  readonly tried: readonly { readonly thicknessMm: number; readonly doseKradSi: number }[];
}

export interface ThicknessResult {
  readonly targetDoseKradSi: number;
  /** The part that allows the least dose, when the target is a margin. */
  readonly drivingPartId: string | null;
  readonly solutions: readonly ThicknessSolution[];
  /** Index of the lightest candidate that meets the target; null when no mass is known. */
  readonly lightest: number | null;
}

/**
 * Thickness of one layer of each candidate at which the highest dose over the cases meets the target.
 *
 * Dose against thickness is nearly straight in logarithms, so a secant in ln thickness, ln dose, kept inside a
 * bracket, needs about six responses. The thickness returned gives the target within 1 % of dose (plus the statistical
 * error of the response); several orders of materials compete by mass.
 *
 * @throws {AppError} ASSESSMENT_INVALID for a faulty request, THICKNESS_UNREACHABLE when no candidate reaches the
 *   target inside [minimumMm, maximumMm]
 */
export async function solveThickness(input: ThicknessInput, tools: ThicknessTools): Promise<ThicknessResult> {
  checkThickness(input);
  const { cases } = prepareCases(input);
  const { targetDoseKradSi, drivingPartId } = targetOf(input);
  const solutions: ThicknessSolution[] = [];
  for (const candidate of input.candidates) {
    solutions.push(await solveCandidate(candidate, input, cases, targetDoseKradSi, tools));
  }
  const reached = solutions.filter(({ status }) => status !== 'notMetAtThickest');
  if (reached.length === 0) {
    const best = solutions.reduce((a, b) => (b.doseKradSi < a.doseKradSi ? b : a));
    throw new AppError(
      'THICKNESS_UNREACHABLE',
      `No candidate brings the dose to ${threeDigits(targetDoseKradSi)} krad(Si) with at most ${input.maximumMm} mm; the best is "${best.name}" with ${threeDigits(best.doseKradSi)} krad(Si).`,
      [{ pointer: '#/maximumMm', detail: 'too thin for the target', got: input.maximumMm, unit: 'mm' }],
    );
  }
  let lightest: number | null = null;
  solutions.forEach(({ status, massKg }, i) => {
    if (status === 'notMetAtThickest' || massKg === null) return;
    if (lightest === null || massKg < (solutions[lightest].massKg ?? Number.POSITIVE_INFINITY)) lightest = i;
  });
  return { targetDoseKradSi, drivingPartId, solutions, lightest };
}

interface Trial {
  readonly thicknessMm: number;
  readonly doseKradSi: number;
  readonly drivingCaseId: string;
  readonly statisticalErrorRel: number;
}

async function solveCandidate(
  candidate: ThicknessCandidate,
  input: ThicknessInput,
  cases: readonly PreparedCase[],
  targetKradSi: number,
  tools: ThicknessTools,
): Promise<ThicknessSolution> {
  const tried: Trial[] = [];
  const attempt = async (thicknessMm: number): Promise<Trial> => {
    tools.signal?.throwIfAborted();
    const stack = withThickness(candidate, thicknessMm);
    const trial = { thicknessMm, ...doseBehind(await tools.respond(stack), stack, input, cases, tools) };
    tried.push(trial);
    return trial;
  };
  const finish = (status: ThicknessSolution['status'], trial: Trial): ThicknessSolution => {
    const stack = withThickness(candidate, trial.thicknessMm);
    return {
      name: candidate.name,
      status,
      stack,
      massKg: tools.massKg(stack),
      ...trial,
      tried: tried.map(({ thicknessMm, doseKradSi }) => ({ thicknessMm, doseKradSi })),
    };
  };
  const off = ({ doseKradSi }: Trial): number => Math.log(Math.max(doseKradSi, 1e-300) / targetKradSi);

  let thin = await attempt(input.minimumMm);
  if (off(thin) <= 0) return finish('metAtThinnest', thin);
  let thick = await attempt(input.maximumMm);
  if (off(thick) > 0) return finish('notMetAtThickest', thick);
  let movedThin = false;
  let run = 0;
  while (tried.length < MAX_EVALUATIONS) {
    const best = Math.abs(off(thin)) < Math.abs(off(thick)) ? thin : thick;
    if (Math.abs(off(best)) <= AIM_REL) return finish('solved', best);
    if (thick.thicknessMm / thin.thicknessMm < NARROWEST_BRACKET) return finish('solved', thick);
    // When the same end has moved twice running, a curved branch holds the other: bisect once.
    const bisecting = run >= 2;
    const share = bisecting ? 0.5 : Math.min(0.98, Math.max(0.02, off(thin) / (off(thin) - off(thick))));
    const next = await attempt(thin.thicknessMm * (thick.thicknessMm / thin.thicknessMm) ** share);
    const movesThin = off(next) > 0;
    run = bisecting ? 0 : movesThin === movedThin ? run + 1 : 1;
    movedThin = movesThin;
    if (movesThin) thin = next;
    else thick = next;
  }
  return finish('solved', thick);
}

/** Highest dose over the cases at the percentile asked for. */
function doseBehind(
  response: ShieldResponse,
  stack: StackInput,
  input: ThicknessInput,
  cases: readonly PreparedCase[],
  tools: ThicknessTools,
): Omit<Trial, 'thicknessMm'> {
  const prepared = prepareResponse(response, input.sampling.seed, input.sampling.draws);
  const draws = input.percentile === 'nominal' ? 0 : input.sampling.draws;
  const place = { aluminiumEquivalent: [{ weight: 1, thicknessMm: tools.aluminiumEquivalentMm(stack) }] };
  const doses = cases.map((one) => {
    const shield = sampleShields(one, [prepared], draws, input.phaseTreatment).get(response.sha256);
    if (shield === undefined) throw new TypeError(`no draws for response ${response.sha256}`);
    const other = otherDoseAt(one.sources, one.caseId, place, response);
    if (other.refused !== null) throw new AppError('DOSE_DEPTH_OUTSIDE_SPAN', other.refused);
    const { nominal, phase } = shield.common;
    const worst = input.phaseTreatment === 'worst';
    const beltsGy =
      input.percentile === 'nominal'
        ? worst
          ? phase.worst.doseGy
          : nominal.totalGy
        : percentile(shield.worstGy ?? shield.jointGy, input.percentile);
    return {
      doseKradSi: gyToKrad(beltsGy + other.totalGy),
      drivingCaseId: one.caseId,
      statisticalErrorRel: nominal.totalGy > 0 ? nominal.sigmaGy / nominal.totalGy : 0,
    };
  });
  return doses.reduce((most, one) => (one.doseKradSi > most.doseKradSi ? one : most));
}

function withThickness({ stack, layerIndex }: ThicknessCandidate, thicknessMm: number): StackInput {
  return {
    ...stack,
    layers: stack.layers.map(
      (layer, i): LayerInput => (i === layerIndex ? { materialId: layer.materialId, thicknessMm } : layer),
    ),
  };
}

function targetOf({ target }: ThicknessInput): { targetDoseKradSi: number; drivingPartId: string | null } {
  if ('doseKradSi' in target) return { targetDoseKradSi: target.doseKradSi, drivingPartId: null };
  let targetDoseKradSi = Number.POSITIVE_INFINITY;
  let drivingPartId: string | null = null;
  for (const part of target.parts) {
    const { row } = preparePart(part, target.requiredRdm);
    const allowed = (row.capabilityKradSi ?? 0) / row.requiredRdm;
    if (allowed < targetDoseKradSi) {
      targetDoseKradSi = allowed;
      drivingPartId = row.partId;
    }
  }
  return { targetDoseKradSi, drivingPartId };
}

/**
 * Checks a request before anything is computed; of the trajectories it needs the ids only.
 *
 * @throws {AppError} ASSESSMENT_INVALID naming the field
 */
export function checkThickness(
  input: Omit<ThicknessInput, 'trajectories'> & { readonly trajectories: readonly { readonly trajectoryId: string }[] },
): void {
  const refuse = (pointer: string, detail: string, got: string | number): never => {
    throw new AppError('ASSESSMENT_INVALID', `${pointer}: ${detail}; got ${got}.`, [{ pointer, detail, got }]);
  };
  if ('parts' in input.target) {
    if (input.target.parts.length === 0) refuse('#/target/parts', 'must hold at least one part', 0);
    checkParts(input.target.parts, '#/target/parts');
    if (!(input.target.requiredRdm > 0)) refuse('#/target/requiredRdm', 'must be above 0', input.target.requiredRdm);
  } else if (!(Number.isFinite(input.target.doseKradSi) && input.target.doseKradSi > 0)) {
    refuse('#/target/doseKradSi', 'must be a number above 0 krad(Si)', input.target.doseKradSi);
  }
  if (input.percentile !== 'nominal' && !(input.percentile >= 50 && input.percentile <= 99.9)) {
    refuse('#/percentile', 'must be nominal or a number from 50 to 99.9', input.percentile);
  }
  if (!(input.minimumMm > 0)) refuse('#/minimumMm', 'must be above 0 mm', input.minimumMm);
  if (!(Number.isFinite(input.maximumMm) && input.maximumMm > input.minimumMm)) {
    refuse('#/maximumMm', 'must be above minimumMm', input.maximumMm);
  }
  if (input.candidates.length === 0) refuse('#/candidates', 'must hold at least one candidate', 0);
  input.candidates.forEach(({ stack, layerIndex }, i) => {
    if (!(Number.isInteger(layerIndex) && layerIndex >= 0 && layerIndex < stack.layers.length)) {
      refuse(`#/candidates/${i}/layerIndex`, `must name one of the ${stack.layers.length} layers`, layerIndex);
    }
  });
  const { draws, seed } = input.sampling;
  if (!(Number.isInteger(draws) && draws >= MIN_DRAWS && draws <= MAX_DRAWS)) {
    refuse('#/sampling/draws', `must be a whole number from ${MIN_DRAWS} to ${MAX_DRAWS}`, draws);
  }
  if (!Number.isInteger(seed)) refuse('#/sampling/seed', 'must be a whole number', seed);
  input.otherSources.forEach((source, i) => {
    checkOtherSource(source, `#/otherSources/${i}`);
  });
  const known = new Set(input.trajectories.map(({ trajectoryId }) => trajectoryId));
  if (input.cases.length === 0) refuse('#/cases', 'must hold at least one case', 0);
  input.cases.forEach(({ legs }, i) => {
    legs.forEach(({ trajectoryId }, j) => {
      if (!known.has(trajectoryId)) {
        refuse(`#/cases/${i}/legs/${j}/trajectoryId`, 'names no trajectory of this request', trajectoryId);
      }
    });
  });
}
