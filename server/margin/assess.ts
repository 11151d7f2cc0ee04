/**
 * The main job: cases × options × parts in one environment, from fluences and responses to margins and verdicts.
 *
 * The dose itself carries no margin: it is the dose of the belts as modelled plus the other sources as entered, with a
 * band for what is not known. Margin is capability over dose and stands beside it.
 */
import { type PreparedCase, placeDose, sampleShields } from './caseRows.ts';
import { checkAssessmentInput } from './checkInput.ts';
import { comparisonRows, sensitivityRow } from './comparison.ts';
import { depthRows } from './depthRows.ts';
import { fluenceRows } from './fluenceRows.ts';
import type { AssessedCase, AssessmentInput } from './input.ts';
import { marginRows, type OptionDoses } from './marginRows.ts';
import { type PreparedPart, preparePart } from './parts.ts';
import { prepareCases } from './prepareCases.ts';
import { provenanceOf, resultHash } from './provenance.ts';
import { type PreparedResponse, prepareResponse, usableResponse } from './responses.ts';
import {
  type AssessmentResult,
  type ComparisonRow,
  type DoseDepthRow,
  type MarginRow,
  RESULT_SCHEMA,
  type ResultCase,
  type ResultNotice,
  type ResultOption,
  type SensitivityRow,
  type ShieldDoseRow,
} from './result.ts';
import { independentPhases } from './schedule.ts';
import { summarise } from './summary.ts';
import { plural } from './text.ts';
import { VERDICT_REASONS } from './verdict.ts';

export interface AssessOptions {
  readonly signal?: AbortSignal;
  /** Called after each case with the share done, 0 to 1. */
  readonly onProgress?: (share: number) => void;
}

/**
 * Assesses every part behind every option in every case.
 *
 * Pure: the same input gives the same numbers on any machine of one architecture and Node version, whatever else has
 * run before. Random numbers derive from `sampling.seed` alone.
 *
 * @throws {AppError} ASSESSMENT_INVALID, PART_INVALID, OTHER_SOURCE_INVALID before anything is computed
 */
export function assess(input: AssessmentInput, options: AssessOptions = {}): AssessmentResult {
  checkAssessmentInput(input);
  const { numbers, spectra, cases: preparedCases, notices: sourceNotices } = prepareCases(input);
  const parts = input.parts.map((part) => preparePart(part, input.study.requiredRdm));
  const responses = uniqueResponses(input);
  const optionRows = resultOptions(input);
  const notices: ResultNotice[] = [...(input.notices ?? []), ...sourceNotices];
  for (const { response } of responses) {
    addNotices(
      notices,
      response.notices.map((text) => ({ code: 'SHIELD_RESPONSE', severity: 'info', text })),
    );
  }

  const doseDepth: DoseDepthRow[] = [];
  const shieldDose: ShieldDoseRow[] = [];
  const margins: MarginRow[] = [];
  const comparison: ComparisonRow[] = [];
  const sensitivity: SensitivityRow[] = [];
  preparedCases.forEach((prepared, index) => {
    options.signal?.throwIfAborted();
    const rows = caseRows(input, prepared, responses, parts, optionRows);
    shieldDose.push(...rows.shieldDose);
    for (const row of rows.margins) margins.push(row);
    comparison.push(...rows.comparison);
    sensitivity.push(...rows.sensitivity);
    const depth = depthRows(prepared, input.doseDepthTables, numbers.draws);
    doseDepth.push(...depth.rows);
    addNotices(notices, depth.notices);
    options.onProgress?.((index + 1) / preparedCases.length);
  });

  const cases = input.cases.map((one) => resultCase(input, one));
  const { studyId, name: studyName, ...rules } = input.study;
  const partRows = parts.map(({ row }) => row);
  const result: AssessmentResult = {
    schema: RESULT_SCHEMA,
    name: input.name,
    study: { studyId, name: studyName, ...rules },
    trajectories: input.trajectories.map(({ trajectoryId, name, sourceSha256, environment, fluence }) => ({
      trajectoryId,
      name,
      planet: fluence.planet,
      sourceSha256,
      fluenceSha256: fluence.inputsSha256,
      environment,
    })),
    cases,
    options: optionRows,
    parts: partRows,
    otherSources: input.otherSources.map(({ name, source, phase, doseKradSi, doseDepth: table, fluence }) => ({
      name,
      source,
      phase,
      kind: doseKradSi !== undefined ? 'dose' : table !== undefined ? 'doseDepth' : 'fluence',
      example: fluence?.example ?? false,
    })),
    fluence: input.trajectories.flatMap(({ trajectoryId }) => fluenceRows(spectra.get(trajectoryId)!, numbers)),
    doseDepth,
    shieldDose,
    margins,
    comparison,
    sensitivity,
    summary: summarise({
      cases,
      options: optionRows,
      parts: partRows,
      shieldDose,
      margins,
      sensitivity,
      verdictPercentile: input.study.verdictPercentile,
    }),
    verdictReasons: VERDICT_REASONS,
    notices: [...STANDING_NOTICES, ...notices, ...chargingNotices(shieldDose)],
    provenance: provenanceOf(input),
  };
  return { ...result, provenance: { ...result.provenance, resultSha256: resultHash(result) } };
}

/** What every result says about itself. */
const STANDING_NOTICES: readonly ResultNotice[] = [
  {
    code: 'DOSE_WITHOUT_MARGIN',
    severity: 'info',
    text: 'The doses carry no margin. The design margin is capability divided by dose and is shown separately; it is not a safety factor.',
  },
  {
    code: 'REQUIRED_MARGIN_IS_INPUT',
    severity: 'info',
    text: 'The required margin is an input of the project, not the number of a standard.',
  },
  {
    code: 'ISOTROPIC_AT_SHIELD',
    severity: 'caution',
    text: 'The flux is taken as isotropic at the shield; an oriented one-sided shield can see up to twice as much.',
  },
  {
    code: 'CHARGING_SCREENED_ONLY',
    severity: 'caution',
    text: 'Internal charging is only screened against guideline figures; single-event effects are not assessed.',
  },
];

interface CaseRows {
  readonly shieldDose: readonly ShieldDoseRow[];
  readonly margins: readonly MarginRow[];
  readonly comparison: readonly ComparisonRow[];
  readonly sensitivity: readonly SensitivityRow[];
}

function caseRows(
  input: AssessmentInput,
  prepared: PreparedCase,
  responses: readonly PreparedResponse[],
  parts: readonly PreparedPart[],
  optionRows: readonly ResultOption[],
): CaseRows {
  const { study, sampling } = input;
  const samples = sampleShields(prepared, responses, sampling.draws, study.phaseTreatment);
  const margins: MarginRow[] = [];
  const sensitivity: SensitivityRow[] = [];
  const places = input.options.flatMap((option) => {
    const here = option.places.map((place) =>
      placeDose(prepared, option.optionId, place, samples, study.verdictPercentile),
    );
    const sites: OptionDoses = {
      caseId: prepared.caseId,
      optionId: option.optionId,
      places: new Map(option.places.map(({ placeId, geometry }, i) => [placeId, { dose: here[i], geometry }] as const)),
      holdsAllParts: option.places.length === 1 && option.places[0].holdsAllParts === true,
    };
    const rows = marginRows(parts, sites, study);
    for (const row of rows) margins.push(row);
    option.places.forEach((place, i) => {
      const row = sensitivityRow(
        prepared,
        place,
        here[i],
        rows.filter(({ placeId }) => placeId === place.placeId),
      );
      if (row !== null) sensitivity.push(row);
    });
    return here;
  });
  return {
    shieldDose: places.map(({ row }) => row),
    margins,
    comparison: comparisonRows(
      places,
      margins,
      new Map(optionRows.map(({ optionId, massKg }) => [optionId, massKg])),
      optionRows.find(({ baseline }) => baseline)!.optionId,
    ),
    sensitivity,
  };
}

function uniqueResponses(input: AssessmentInput): PreparedResponse[] {
  const found = new Map<string, PreparedResponse>();
  for (const { places } of input.options) {
    for (const place of places) {
      const usable = usableResponse(place);
      if ('refused' in usable || found.has(usable.response.sha256)) continue;
      found.set(usable.response.sha256, prepareResponse(usable.response, input.sampling.seed, input.sampling.draws));
    }
  }
  return [...found.values()];
}

function resultOptions(input: AssessmentInput): ResultOption[] {
  const baseline = input.baselineOptionId ?? input.options[0].optionId;
  return input.options.map(({ optionId, name, places }) => ({
    optionId,
    name,
    massKg: places.reduce<number | null>(
      (sum, { massKg }) => (sum === null || massKg === null ? null : sum + massKg),
      0,
    ),
    baseline: optionId === baseline,
    places: places.map((place) => {
      const usable = usableResponse(place);
      return {
        placeId: place.placeId,
        name: place.name,
        geometry: place.geometry,
        shieldText: place.shieldText,
        massKg: place.massKg,
        response:
          place.response === null
            ? null
            : {
                sha256: place.response.sha256,
                description: place.response.description,
                effort: place.response.effort,
                targetMaterialId: place.response.targetMaterialId,
              },
        notAssessed: 'refused' in usable ? usable.refused : null,
      };
    }),
  }));
}

function resultCase(input: AssessmentInput, one: AssessedCase): ResultCase {
  const flown = one.legs.map(({ trajectoryId, repetitions }) => ({
    trajectory: input.trajectories.find((candidate) => candidate.trajectoryId === trajectoryId)!,
    repetitions,
  }));
  const independent = flown.filter(({ trajectory }) => independentPhases(trajectory));
  const repeated = flown.some(({ repetitions }) => repetitions > 1);
  return {
    caseId: one.caseId,
    name: one.name,
    planets: [...new Set(flown.map(({ trajectory }) => trajectory.fluence.planet))],
    legs: flown.map(({ trajectory, repetitions }) => ({
      trajectoryId: trajectory.trajectoryId,
      trajectoryName: trajectory.name,
      repetitions,
    })),
    passCount: flown.reduce(
      (sum, { trajectory, repetitions }) => sum + repetitions * trajectory.fluence.groups.length,
      0,
    ),
    phaseOfRepetitions: phaseText(independent.length === flown.length, independent.length > 0, repeated),
  };
}

function phaseText(all: boolean, some: boolean, repeated: boolean): string {
  if (!repeated) {
    return some
      ? 'Each leg is flown once, at a rotation phase drawn for it alone.'
      : 'Each leg is flown once; all legs share the offset of the rotation model.';
  }
  if (all) {
    return 'Each repetition of a leg draws its own rotation phase; the nominal dose of a repeated leg is the mean over phases. Repetitions within 30 days share the state of the belts.';
  }
  return some
    ? 'Repetitions of swept legs draw their own rotation phase; other legs share the offset of the rotation model. Repetitions within 30 days share the state of the belts.'
    : 'All repetitions meet the planet at the phase of the trajectory given and share the offset of the rotation model. Repetitions within 30 days share the state of the belts.';
}

/** Flags of the charging screen, counted: the rows hold the numbers. */
function chargingNotices(rows: readonly ShieldDoseRow[]): ResultNotice[] {
  const flagged = rows.filter(({ charging }) => charging?.currentFlag === 'above' || charging?.fluenceFlag === 'above');
  if (flagged.length === 0) return [];
  return [
    {
      code: 'CHARGING_FLAGGED',
      severity: 'caution',
      text: `Behind ${plural(flagged.length, 'shield')} of ${rows.length} the nominal electrons exceed a guideline figure for internal charging; a charging analysis is needed there.`,
    },
  ];
}

function addNotices(into: ResultNotice[], more: readonly ResultNotice[]): void {
  for (const notice of more) {
    if (!into.some(({ code, text }) => code === notice.code && text === notice.text)) into.push(notice);
  }
}
