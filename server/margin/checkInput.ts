/** Whether an assessment request holds together, before anything is computed. */
import { checkOtherSource } from '../dose/index.ts';
import { AppError, type ErrorPlace } from '../errors.ts';
import type { AssessmentInput } from './input.ts';
import { checkParts } from './parts.ts';

export const MIN_DRAWS = 100;
export const MAX_DRAWS = 100_000;
const MIN_VERDICT_PERCENTILE = 50;
const MAX_VERDICT_PERCENTILE = 99.9;
const MAX_REPETITIONS = 10_000;

/**
 * Refuses an assessment that names things it does not hold or numbers out of range.
 *
 * @throws {AppError} ASSESSMENT_INVALID, PART_INVALID or OTHER_SOURCE_INVALID naming every faulty field
 */
export function checkAssessmentInput(input: AssessmentInput): void {
  const places: ErrorPlace[] = [];
  const range = (pointer: string, value: number, low: number, high: number, whole = false): void => {
    if (!(value >= low && value <= high) || (whole && !Number.isInteger(value))) {
      const kind = whole ? 'a whole number' : 'a number';
      places.push({
        pointer,
        detail: `must be ${kind} from ${low} to ${high}`,
        got: value,
        limit: value < low ? low : high,
      });
    }
  };
  const { study, sampling } = input;
  if (!(Number.isFinite(study.requiredRdm) && study.requiredRdm > 0)) {
    places.push({
      pointer: '#/study/requiredRdm',
      detail: 'must be a number above 0',
      got: study.requiredRdm,
      limit: 0,
    });
  }
  range('#/study/verdictPercentile', study.verdictPercentile, MIN_VERDICT_PERCENTILE, MAX_VERDICT_PERCENTILE);
  range('#/study/extrapolatedShareLimit', study.extrapolatedShareLimit, 0, 1);
  range('#/sampling/draws', sampling.draws, MIN_DRAWS, MAX_DRAWS, true);
  range('#/sampling/seed', sampling.seed, 0, 4294967295, true);
  unique(places, '#/trajectories', 'trajectoryId', input.trajectories);
  unique(places, '#/cases', 'caseId', input.cases);
  unique(places, '#/options', 'optionId', input.options);
  const known = new Set(input.trajectories.map(({ trajectoryId }) => trajectoryId));
  input.cases.forEach(({ legs }, i) => {
    if (legs.length === 0) places.push({ pointer: `#/cases/${i}/legs`, detail: 'a case needs at least one leg' });
    legs.forEach(({ trajectoryId, repetitions }, j) => {
      if (!known.has(trajectoryId)) {
        places.push({
          pointer: `#/cases/${i}/legs/${j}/trajectoryId`,
          detail: 'names no trajectory of this assessment',
          got: trajectoryId,
        });
      }
      range(`#/cases/${i}/legs/${j}/repetitions`, repetitions, 1, MAX_REPETITIONS, true);
    });
  });
  input.options.forEach(({ places: sites }, i) => {
    if (sites.length === 0)
      places.push({ pointer: `#/options/${i}/places`, detail: 'an option needs at least one place' });
    unique(places, `#/options/${i}/places`, 'placeId', sites);
  });
  if (input.baselineOptionId !== undefined && !input.options.some((o) => o.optionId === input.baselineOptionId)) {
    places.push({
      pointer: '#/baselineOptionId',
      detail: 'names no option of this assessment',
      got: input.baselineOptionId,
    });
  }
  if (places.length > 0) {
    throw new AppError('ASSESSMENT_INVALID', `${places[0].pointer}: ${places[0].detail}.`, places);
  }
  checkParts(input.parts);
  input.otherSources.forEach((source, i) => {
    checkOtherSource(source, `#/otherSources/${i}`);
  });
}

function unique<K extends string>(
  places: ErrorPlace[],
  pointer: string,
  key: K,
  rows: readonly Readonly<Record<K, string>>[],
): void {
  if (rows.length === 0 && pointer.split('/').length === 2) {
    places.push({ pointer, detail: 'must hold at least one entry', got: 0, limit: 1 });
  }
  const seen = new Set<string>();
  rows.forEach((row, i) => {
    if (seen.has(row[key])) places.push({ pointer: `${pointer}/${i}/${key}`, detail: 'stands twice', got: row[key] });
    seen.add(row[key]);
  });
}
