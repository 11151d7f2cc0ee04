import { readFileSync } from 'node:fs';
import { startAssessment } from './api/assessments.ts';
import { assessmentBody } from './api/schemas.ts';
import type { Shop, TrajectoryBody } from './api/shop.ts';
import { readReference } from './constants/reference.ts';
import type { PartInput } from './margin/index.ts';
import type { ShieldInput, ShieldResponse, StackInput } from './shielding/types.ts';

const DEMO = new URL('../fixtures/demo/', import.meta.url);

interface DemoStudy {
  readonly study: Parameters<Shop['studies']['insert']>[2] & { readonly name: string };
  readonly trajectories: readonly { readonly key: string; readonly file: string; readonly name: string }[];
  readonly cases: readonly {
    readonly name: string;
    readonly legs: readonly { readonly trajectory: string; readonly repetitions: number }[];
  }[];
  readonly stacks: readonly (StackInput & { readonly key: string; readonly name: string })[];
  readonly options: readonly {
    readonly name: string;
    readonly places: readonly {
      readonly placeId: string;
      readonly name: string;
      /** Key of a stack, or a shield of its own. */
      readonly stack?: string;
      readonly shield?: ShieldInput;
      readonly areaM2?: number;
    }[];
  }[];
  readonly parts: readonly PartInput[];
  readonly assessment: { readonly name: string; readonly sampling: { readonly draws: number; readonly seed: number } };
}

/**
 * Fills an empty database with the demo study (invented, and labelled so) and starts its assessment, so that a newcomer
 * finds doses instead of an empty page. A database that holds any study is left alone.
 */
export async function seedDemo(shop: Shop): Promise<{ studyId: string; assessmentId: string } | null> {
  if (shop.studies.list(null, 1, null).items.length > 0) return null;
  const demo = JSON.parse(readFileSync(new URL('study.json', DEMO), 'utf8')) as DemoStudy;
  const readings = await Promise.all(
    demo.trajectories.map(async ({ key, file, name }) => {
      const sha256 = shop.blobs.put(readFileSync(new URL(file, DEMO)));
      const read = await shop.pool.run({
        kind: 'readTrajectory',
        filePath: shop.blobs.path(sha256),
        request: { name },
      });
      return { key, name, sha256, read };
    }),
  );
  for (const [key, response] of Object.entries(shippedResponses())) {
    if (shop.artefacts.path(key) === null) shop.artefacts.put(key, 'response', response);
  }
  return shop.store.transaction(() => {
    const { name, ...study } = demo.study;
    const studyId = shop.studies.insert(null, name, study).id;
    const trajectoryIds = new Map(
      readings.map(({ key, name: trajectoryName, sha256, read }) => [
        key,
        shop.trajectories.insert(studyId, trajectoryName, { ...read, request: {} } as TrajectoryBody, {
          blobSha256: sha256,
        }).id,
      ]),
    );
    const caseIds = demo.cases.map(
      ({ name: caseName, legs }) =>
        shop.cases.insert(studyId, caseName, {
          legs: legs.map(({ trajectory, repetitions }) => ({
            trajectoryId: trajectoryIds.get(trajectory)!,
            repetitions,
          })),
        }).id,
    );
    const stacks = new Map(demo.stacks.map(({ key, name: stackName, ...stack }) => [key, { stackName, stack }]));
    for (const { stackName, stack } of stacks.values()) shop.stacks.insert(studyId, stackName, stack);
    const optionIds = demo.options.map(
      ({ name: optionName, places }) =>
        shop.options.insert(studyId, optionName, {
          places: places.map(({ stack, shield, ...place }) => ({
            ...place,
            shield: shield ?? { kind: 'stack', stack: stacks.get(stack!)!.stack },
          })),
        }).id,
    );
    for (const part of demo.parts) shop.parts.insert(studyId, part.name, part);
    const { id } = startAssessment(
      shop,
      assessmentBody.parse({
        studyId,
        name: demo.assessment.name,
        caseIds,
        optionIds,
        sampling: demo.assessment.sampling,
      }),
    );
    return { studyId, assessmentId: id };
  })();
}

/** Responses of the demo's shields, computed ahead under the keys the service would give them. */
export function shippedResponses(): Record<string, ShieldResponse> {
  return JSON.parse(readReference('responses-demo', 'responses.json').text, (_field, value: unknown) => {
    const array = (value as { float64?: number[] } | null)?.float64;
    return array === undefined ? value : Float64Array.from(array);
  }) as Record<string, ShieldResponse>;
}
