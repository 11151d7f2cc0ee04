import type { Artefacts } from '../../db/artefacts.ts';
import type { Blobs } from '../../db/blobs.ts';
import type { Documents } from '../../db/documents.ts';
import { contentHash } from '../canonical.ts';
import { AppError } from '../errors.ts';
import type { EnvironmentChoice } from '../fluence/index.ts';
import type { AssessmentResult, ResultNotice } from '../margin/index.ts';
import {
  doneShare,
  finishResponse,
  planRound,
  type ResponseOptions,
  responseKey,
  type ShardTally,
} from '../shielding/response.ts';
import { aluminiumEquivalentMm, describeStack, massOverAreaKg, normaliseStack } from '../shielding/stack.ts';
import type { ShieldResponse, StackInput } from '../shielding/types.ts';
import { ENGINE_VERSION } from '../version.ts';
import { environmentFor } from './environment.ts';
import type { Pool } from './pool.ts';
import type { JobContext } from './runner.ts';
import type { AssessmentSnapshot } from './snapshot.ts';
import type { AssessOrder } from './worker.ts';

/** What long work needs of the store. */
export interface Workshop {
  readonly pool: Pool;
  readonly artefacts: Artefacts;
  readonly blobs: Blobs;
}

export interface StoredTrajectory {
  readonly id: string;
  readonly name: string;
  readonly blobSha256: string;
  readonly request: { readonly planet?: 'uranus' | 'neptune'; readonly targetId?: number };
  readonly planet: 'uranus' | 'neptune';
  readonly startTdbS: number;
  readonly stopTdbS: number;
  readonly pathSha256: string;
}

/** Fluence artefact of a trajectory in an environment: computed once, then found by its hash. */
export async function exposureOf(
  shop: Workshop,
  trajectory: StoredTrajectory,
  environment: EnvironmentChoice,
  context: JobContext,
): Promise<{ key: string; fluencePath: string; summaryPath: string }> {
  const key = contentHash({ kind: 'exposure', engine: ENGINE_VERSION, path: trajectory.pathSha256, environment });
  let fluencePath = shop.artefacts.path(key);
  let summaryPath = shop.artefacts.path(`${key}:summary`);
  if (fluencePath === null || summaryPath === null) {
    const temporary = shop.blobs.path(`.exposure-${key}`);
    const summary = await shop.pool.run(
      {
        kind: 'exposure',
        filePath: shop.blobs.path(trajectory.blobSha256),
        request: trajectory.request,
        environment,
        outPath: temporary,
      },
      context.signal,
    );
    fluencePath = await shop.artefacts.adopt(key, 'fluence', temporary);
    summaryPath = shop.artefacts.put(`${key}:summary`, 'exposureSummary', summary);
  }
  return { key, fluencePath, summaryPath };
}

/** Response of a stack: shards spread over the pool, merged in their own order, so any number of workers gives the same. */
export async function responseOf(
  shop: Workshop,
  stack: StackInput,
  options: ResponseOptions,
  signal: AbortSignal | undefined,
  onProgress: (share: number) => void,
): Promise<{ path: string; response: ShieldResponse }> {
  const key = responseKey(stack, options);
  const known = await shop.artefacts.get<ShieldResponse>(key);
  if (known !== null) return { path: shop.artefacts.path(key)!, response: known };
  const tallies: ShardTally[] = [];
  for (;;) {
    const tasks = planRound(stack, options, tallies);
    if (tasks.length === 0) break;
    const before = doneShare(options, tallies);
    let done = 0;
    const round = await Promise.all(
      tasks.map(async (task) => {
        const tally = await shop.pool.run({ kind: 'shard', task }, signal);
        done += 1;
        onProgress(before + ((1 - before) * 0.9 * done) / tasks.length);
        return tally;
      }),
    );
    tallies.push(...round);
  }
  const response = finishResponse(stack, options, tallies);
  return { path: shop.artefacts.put(key, 'response', response), response };
}

export const STANDARD_RESPONSE: ResponseOptions = { effort: 'standard', targetMaterialId: 'Si', seed: 1 };

/** The main job: exposures, responses, then the assessment itself; everything already known is taken from the store. */
export async function runAssessment(
  shop: Workshop,
  assessments: Documents<{ jobId: string; snapshot: AssessmentSnapshot }>,
  assessmentId: string,
  context: JobContext,
): Promise<{ resultPath: string; resultSha256: string }> {
  const document = assessments.get(assessmentId);
  if (document === undefined) throw new Error(`assessment ${assessmentId} has gone`);
  const { snapshot } = document.body;
  const notices: ResultNotice[] = [];

  let followed = 0;
  context.progress(0, 'Following the paths through the belts');
  const trajectories: AssessOrder['trajectories'] = await Promise.all(
    snapshot.trajectories.map(async (trajectory) => {
      const environment = environmentFor(snapshot.environment, trajectory.planet, trajectory.startTdbS);
      const { fluencePath } = await exposureOf(shop, trajectory, environment, context);
      followed += 1;
      context.progress(
        (0.35 * followed) / snapshot.trajectories.length,
        `Followed ${trajectory.name} through the belts`,
      );
      return {
        trajectoryId: trajectory.id,
        name: trajectory.name,
        sourceSha256: trajectory.blobSha256,
        environment,
        startTdbS: trajectory.startTdbS,
        stopTdbS: trajectory.stopTdbS,
        fluencePath,
      };
    }),
  );

  const shields = snapshot.options.flatMap((option) => option.places.map((place) => place.shield.stack));
  let finished = 0;
  const paths = new Map<string, { path: string | null; notAssessed: string | null }>();
  for (const stack of shields) {
    const key = responseKey(stack, STANDARD_RESPONSE);
    if (!paths.has(key)) {
      const text = describeStack(normaliseStack(stack));
      const report = (share: number) =>
        context.progress(0.35 + (0.5 * (finished + share)) / shields.length, `Carrying particles through ${text}`);
      report(0);
      try {
        const { path, response } = await responseOf(shop, stack, STANDARD_RESPONSE, context.signal, report);
        for (const text of response.notices) {
          if (!notices.some((notice) => notice.text === text))
            notices.push({ code: 'response', severity: 'info', text });
        }
        paths.set(key, { path, notAssessed: null });
      } catch (error) {
        // A shield outside the validity of the transport leaves its rows empty, with the reason; the others are assessed.
        if (!(error instanceof AppError && error.code === 'RESPONSE_UNSUPPORTED')) throw error;
        paths.set(key, { path: null, notAssessed: error.message });
      }
    }
    finished += 1;
  }

  context.progress(0.86, 'Drawing belts, phases and lots');
  const order: AssessOrder = {
    input: {
      name: document.name,
      study: snapshot.study,
      cases: snapshot.cases,
      parts: snapshot.parts,
      otherSources: snapshot.otherSources,
      sampling: snapshot.sampling,
      ...(snapshot.baselineOptionId === undefined ? {} : { baselineOptionId: snapshot.baselineOptionId }),
      notices,
      runtime: { engineVersion: ENGINE_VERSION, nodeVersion: process.version, architecture: process.arch },
    },
    trajectories,
    options: snapshot.options.map((option) => ({
      optionId: option.optionId,
      name: option.name,
      places: option.places.map((place) => {
        const stack = normaliseStack(place.shield.stack);
        const known = paths.get(responseKey(place.shield.stack, STANDARD_RESPONSE))!;
        return {
          placeId: place.placeId,
          name: place.name,
          geometry: stack.geometry,
          shieldText: describeStack(stack),
          massKg: place.areaM2 === undefined ? null : massOverAreaKg(stack, place.areaM2),
          responsePath: known.path,
          ...(known.notAssessed === null ? {} : { notAssessed: known.notAssessed }),
          aluminiumEquivalent: [{ weight: 1, thicknessMm: aluminiumEquivalentMm(stack) }],
          ...(place.holdsAllParts === true ? { holdsAllParts: true } : {}),
        };
      }),
    })),
  };
  const result: AssessmentResult = await shop.pool.run({ kind: 'assess', order }, context.signal);
  const resultSha256 = shop.blobs.put(Buffer.from(JSON.stringify(result)));
  return { resultPath: resultSha256, resultSha256: result.provenance.resultSha256 };
}
