/** What made a result: the hash of every input, and the hash of the result itself. */
import { createHash } from 'node:crypto';
import { contentHash } from '../canonical.ts';
import type { AssessmentInput } from './input.ts';
import type { AssessmentResult, ResultProvenance } from './result.ts';

/** Keys that name records or moments, not content: a re-run under other ids must give the same hash. */
const NOT_CONTENT = new Set([
  'studyId',
  'trajectoryId',
  'caseId',
  'optionId',
  'placeId',
  'partId',
  'lightestMeetingOptionId',
  'utc',
  'peakUtc',
  'resultSha256',
]);

/**
 * The value without record ids and times, at every depth, its keys in the order of RFC 8785.
 *
 * A copy with sorted keys is written by the built-in serialiser exactly as RFC 8785 asks (its numbers and strings are
 * those of ECMAScript), many times faster than sorting on the way; a test holds the two against each other.
 */
function content(value: unknown): unknown {
  if (Array.isArray(value)) return value.map(content);
  if (value === null || typeof value !== 'object') return value;
  const out: Record<string, unknown> = {};
  for (const key of contentKeys(value)) out[key] = content((value as Record<string, unknown>)[key]);
  return out;
}

/** Rows of one kind have their keys in one order: it is sorted once. */
const keyOrders = new Map<string, readonly string[]>();
function contentKeys(value: object): readonly string[] {
  const keys = Object.keys(value);
  const signature = keys.join('\n');
  let order = keyOrders.get(signature);
  if (order === undefined) {
    order = keys.filter((key) => !NOT_CONTENT.has(key)).sort();
    if (keyOrders.size > 500) keyOrders.clear();
    keyOrders.set(signature, order);
  }
  return order;
}

/** Rows written at a time: a large trade has 100 000 margins, which need not stand in memory twice. */
const ROWS_PER_PIECE = 1000;

/** The text that the hash of a result is taken over, in pieces. */
export function* hashedText(result: AssessmentResult): Generator<string> {
  let separator = '{';
  for (const key of contentKeys(result)) {
    yield `${separator}${JSON.stringify(key)}:`;
    separator = ',';
    const value = result[key as keyof AssessmentResult];
    if (!Array.isArray(value) || value.length <= ROWS_PER_PIECE) {
      yield JSON.stringify(content(value));
      continue;
    }
    for (let row = 0; row < value.length; row += ROWS_PER_PIECE) {
      const piece = JSON.stringify(content(value.slice(row, row + ROWS_PER_PIECE)));
      yield (row === 0 ? '[' : ',') + piece.slice(1, -1);
    }
    yield ']';
  }
  yield '}';
}

/** SHA-256 over the canonical JSON of a result without record ids and times; rows stand for what they name by order. */
export function resultHash(result: AssessmentResult): string {
  const hash = createHash('sha256');
  for (const piece of hashedText(result)) hash.update(piece);
  return hash.digest('hex');
}

/** Provenance of a result, its own hash still empty. */
export function provenanceOf(input: AssessmentInput): ResultProvenance {
  const inputs: { kind: string; name: string; sha256: string }[] = [];
  for (const trajectory of input.trajectories) {
    inputs.push({ kind: 'trajectory', name: trajectory.name, sha256: trajectory.sourceSha256 });
    inputs.push({ kind: 'fluence', name: trajectory.name, sha256: trajectory.fluence.inputsSha256 });
  }
  const byId = new Map(input.trajectories.map(({ trajectoryId, sourceSha256 }) => [trajectoryId, sourceSha256]));
  for (const { name, legs } of input.cases) {
    const flown = legs.map(({ trajectoryId, repetitions }) => ({
      sha256: byId.get(trajectoryId) ?? null,
      repetitions,
    }));
    inputs.push({ kind: 'case', name, sha256: contentHash({ name, legs: flown }) });
  }
  const responses = new Set<string>();
  for (const option of input.options) {
    const places = option.places.map(({ name, geometry, shieldText, massKg, response }) => ({
      name,
      geometry,
      shieldText,
      massKg,
      responseSha256: response?.sha256 ?? null,
    }));
    inputs.push({ kind: 'option', name: option.name, sha256: contentHash({ name: option.name, places }) });
    for (const { name, response } of option.places) {
      if (response === null || responses.has(response.sha256)) continue;
      responses.add(response.sha256);
      inputs.push({ kind: 'response', name: `${option.name}: ${name}`, sha256: response.sha256 });
    }
  }
  for (const part of input.parts) {
    inputs.push({ kind: 'part', name: part.name, sha256: contentHash({ ...part, partId: null, placeId: null }) });
  }
  for (const source of input.otherSources) {
    inputs.push({ kind: 'otherSource', name: source.name, sha256: contentHash({ ...source, caseIds: null }) });
  }
  for (const { geometry, materialId, depthsMm, responses: at } of input.doseDepthTables) {
    inputs.push({
      kind: 'doseDepthTable',
      name: `${materialId} ${geometry}`,
      sha256: contentHash({ geometry, materialId, depthsMm, responses: at.map(({ sha256 }) => sha256) }),
    });
  }
  const { studyId, ...study } = input.study;
  const models = new Map<string, ResultProvenance['models'][number]>();
  const add = (kind: ResultProvenance['models'][number]['kind'], modelId: string): void => {
    models.set(`${kind} ${modelId}`, { kind, modelId });
  };
  for (const { environment, fluence } of input.trajectories) {
    add('field', environment.fieldModelId);
    for (const { fieldModelId } of fluence.variants) add('field', fieldModelId);
    add('rotation', environment.rotationModelId);
    add('belt', fluence.beltModelId);
  }
  for (const { places } of input.options) {
    for (const { response } of places) if (response !== null) add('response', response.engineVersion);
  }
  return {
    ...input.runtime,
    seed: input.sampling.seed,
    draws: input.sampling.draws,
    inputs,
    inputsSha256: contentHash({
      inputs: inputs.map(({ kind, sha256 }) => ({ kind, sha256 })),
      study,
      sampling: input.sampling,
      environments: input.trajectories.map(({ environment }) => environment),
      engineVersion: input.runtime.engineVersion,
    }),
    models: [...models.values()],
    resultSha256: '',
  };
}
