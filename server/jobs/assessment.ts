import type { Artefacts } from '../../db/artefacts.ts';
import type { Blobs } from '../../db/blobs.ts';
import type { Documents } from '../../db/documents.ts';
import { contentHash } from '../canonical.ts';
import type { EnvironmentChoice, ExposureOptions } from '../fluence/index.ts';
import {
  type AssessmentResult,
  type ResultNotice,
  scaleShield,
  THICKER_FACTOR,
  THINNER_FACTOR,
} from '../margin/index.ts';
import { aluminiumEquivalents, shieldKey } from '../shielding/composeShield.ts';
import { placeMassKg } from '../shielding/mass.ts';
import { describeShield } from '../shielding/shieldPlan.ts';
import type { ShieldInput } from '../shielding/types.ts';
import { ENGINE_VERSION } from '../version.ts';
import { environmentFor } from './environment.ts';
import type { Pool } from './pool.ts';
import type { JobContext } from './runner.ts';
import { responseOrReason, STANDARD_RESPONSE } from './shieldResponses.ts';
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

/** What only the summary of an exposure depends on. */
export type SummaryRequest = Pick<ExposureOptions, 'thresholdsMeV' | 'sampling' | 'compareFieldModelIds'>;

/** Fluence artefact of a trajectory in an environment: computed once, then found by its hash. */
export async function exposureOf(
  shop: Workshop,
  trajectory: StoredTrajectory,
  environment: EnvironmentChoice,
  context: JobContext,
  summaryRequest: SummaryRequest = {},
): Promise<{ key: string; summaryKey: string; fluencePath: string; summaryPath: string }> {
  const key = contentHash({ kind: 'exposure', engine: ENGINE_VERSION, path: trajectory.pathSha256, environment });
  let fluencePath = shop.artefacts.path(key);
  const summaryKey = `${key}:summary:${contentHash(summaryRequest)}`;
  let summaryPath = shop.artefacts.path(summaryKey);
  if (fluencePath === null || summaryPath === null) {
    const temporary = shop.blobs.path(`.exposure-${contentHash(summaryKey)}`);
    const summary = await shop.pool.run(
      {
        kind: 'exposure',
        filePath: shop.blobs.path(trajectory.blobSha256),
        request: trajectory.request,
        environment,
        summary: summaryRequest,
        beltTablePath: environment.beltTableSha256 === undefined ? null : shop.blobs.path(environment.beltTableSha256),
        outPath: temporary,
      },
      context.signal,
    );
    fluencePath = await shop.artefacts.adopt(key, 'fluence', temporary);
    summaryPath = shop.artefacts.put(summaryKey, 'exposureSummary', summary);
  }
  return { key, summaryKey, fluencePath, summaryPath };
}

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

  const shields = snapshot.options.flatMap((option) => option.places.map((place) => place.shield));
  const otherTargets = snapshot.otherTargetMaterialIds ?? [];
  const wanted = shields.flatMap((shield) => [
    { shield, text: describeShield(shield), targetMaterialId: STANDARD_RESPONSE.targetMaterialId },
    ...otherTargets.map((targetMaterialId) => ({
      shield,
      text: `${describeShield(shield)}, dose in ${targetMaterialId}`,
      targetMaterialId,
    })),
    ...(snapshot.sensitivity === false
      ? []
      : [THINNER_FACTOR, THICKER_FACTOR].map((factor) => ({
          shield: scaleShield(shield, factor),
          text: `${describeShield(shield)}, all layers × ${factor}`,
          targetMaterialId: STANDARD_RESPONSE.targetMaterialId,
        }))),
  ]);
  const responses = new Map<string, { path: string | null; notAssessed: string | null }>();
  for (const [index, { shield, text, targetMaterialId }] of wanted.entries()) {
    const key = shieldKey(shield, { ...STANDARD_RESPONSE, targetMaterialId });
    if (responses.has(key)) continue;
    const report = (share: number) =>
      context.progress(0.35 + (0.5 * (index + share)) / wanted.length, `Carrying particles through ${text}`);
    report(0);
    const got = await responseOrReason(shop, shield, targetMaterialId, context.signal, report);
    if (typeof got === 'string') {
      responses.set(key, { path: null, notAssessed: got });
      continue;
    }
    responses.set(key, { path: got.path, notAssessed: null });
  }
  const pathOf = (shield: ShieldInput, targetMaterialId = STANDARD_RESPONSE.targetMaterialId) =>
    responses.get(shieldKey(shield, { ...STANDARD_RESPONSE, targetMaterialId }));

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
        const { shield } = place;
        const known = pathOf(shield)!;
        const scaled = (factor: number) =>
          snapshot.sensitivity === false ? null : (pathOf(scaleShield(shield, factor))?.path ?? null);
        return {
          placeId: place.placeId,
          name: place.name,
          geometry: shield.kind === 'stack' ? shield.stack.geometry : shield.kind,
          shieldText: describeShield(shield),
          massKg: placeMassKg(place),
          responsePath: known.path,
          thinnerPath: scaled(THINNER_FACTOR),
          thickerPath: scaled(THICKER_FACTOR),
          otherTargetPaths: otherTargets.flatMap((target) => pathOf(shield, target)?.path ?? []),
          ...(known.notAssessed === null ? {} : { notAssessed: known.notAssessed }),
          aluminiumEquivalent: aluminiumEquivalents(shield),
          ...(place.holdsAllParts === true ? { holdsAllParts: true } : {}),
        };
      }),
    })),
  };
  const result: AssessmentResult = await shop.pool.run({ kind: 'assess', order }, context.signal);
  const resultSha256 = shop.blobs.put(Buffer.from(JSON.stringify(result)));
  return { resultPath: resultSha256, resultSha256: result.provenance.resultSha256 };
}
