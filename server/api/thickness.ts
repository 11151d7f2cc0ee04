import { readFile } from 'node:fs/promises';
import { deserialize } from 'node:v8';
import { z } from 'zod';
import type { FluenceArtefact } from '../fluence/index.ts';
import { exposureOf } from '../jobs/assessment.ts';
import { type EnvironmentRequest, environmentFor } from '../jobs/environment.ts';
import { responseOf, STANDARD_RESPONSE } from '../jobs/shieldResponses.ts';
import { solveThickness } from '../margin/index.ts';
import { aluminiumEquivalentMm, massOverAreaKg, normaliseStack } from '../shielding/stack.ts';
import type { StackInput } from '../shielding/types.ts';
import { defineRoute, type Route } from './routes.ts';
import { anyObject, environmentSchema, stackSchema } from './schemas.ts';
import { found, type Shop } from './shop.ts';

const thicknessBody = z.object({
  studyId: z.string(),
  trajectoryIds: z.array(z.string()).min(1).max(20),
  candidates: z
    .array(z.object({ name: z.string().min(1), stack: stackSchema, layerIndex: z.number().int().min(0) }))
    .min(1)
    .max(10),
  targetDoseKradSi: z.number().positive(),
  percentile: z.union([z.number().min(50).max(99.9), z.literal('nominal')]).default('nominal'),
  minimumMm: z.number().positive().default(0.1),
  maximumMm: z.number().positive().max(500).default(25),
  areaM2: z.number().positive().optional(),
  environment: environmentSchema.default({}),
  sampling: z
    .object({ draws: z.number().int().min(100).max(20_000), seed: z.number().int().min(0) })
    .default({ draws: 1000, seed: 1 }),
});

export function thicknessRoutes(shop: Shop): Route[] {
  return [
    defineRoute({
      method: 'post',
      path: '/api/thickness',
      tag: 'shielding',
      summary: 'Thickness of one layer at which the highest dose over the trajectories meets a target',
      body: thicknessBody,
      answer: anyObject,
      handler: async ({ body, request }) => {
        const study = found(shop.studies.get(body.studyId), 'study', body.studyId);
        for (const [index, candidate] of body.candidates.entries()) {
          normaliseStack(candidate.stack as StackInput, `#/candidates/${index}/stack`);
        }
        const abort = new AbortController();
        request.on('aborted', () => abort.abort(new Error('caller has gone')));
        const context = { signal: abort.signal, progress: () => {} };
        const trajectories = await Promise.all(
          body.trajectoryIds.map(async (id) => {
            const trajectory = shop.storedTrajectory(id);
            const environment = environmentFor(
              body.environment as EnvironmentRequest,
              trajectory.planet,
              trajectory.startTdbS,
            );
            const { fluencePath } = await exposureOf(shop, trajectory, environment, context);
            return {
              trajectoryId: id,
              name: trajectory.name,
              sourceSha256: trajectory.blobSha256,
              environment,
              startTdbS: trajectory.startTdbS,
              stopTdbS: trajectory.stopTdbS,
              fluence: deserialize(await readFile(fluencePath)) as FluenceArtefact,
            };
          }),
        );
        return solveThickness(
          {
            trajectories,
            cases: trajectories.map(({ trajectoryId, name }) => ({
              caseId: trajectoryId,
              name,
              legs: [{ trajectoryId, repetitions: 1 }],
            })),
            otherSources: [],
            sampling: body.sampling,
            target: { doseKradSi: body.targetDoseKradSi },
            percentile: body.percentile,
            phaseTreatment: study.body.phaseTreatment,
            candidates: body.candidates.map((candidate) => ({ ...candidate, stack: candidate.stack as StackInput })),
            minimumMm: body.minimumMm,
            maximumMm: body.maximumMm,
          },
          {
            respond: async (stack) =>
              (await responseOf(shop, stack, STANDARD_RESPONSE, abort.signal, () => {})).response,
            massKg: (stack) => (body.areaM2 === undefined ? null : massOverAreaKg(normaliseStack(stack), body.areaM2)),
            aluminiumEquivalentMm: (stack) => aluminiumEquivalentMm(normaliseStack(stack)),
            signal: abort.signal,
          },
        );
      },
    }),
  ];
}
