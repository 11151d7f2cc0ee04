import { z } from 'zod';
import type { OtherSourceInput } from '../dose/index.ts';
import { AppError } from '../errors.ts';
import type { EnvironmentRequest } from '../jobs/environment.ts';
import { runThickness, type ThicknessSnapshot } from '../jobs/thickness.ts';
import { checkThickness, type ThicknessResult } from '../margin/index.ts';
import { describeStack, normaliseStack } from '../shielding/stack.ts';
import type { StackInput } from '../shielding/types.ts';
import { requestedCases } from './assessments.ts';
import { withBeltTable } from './beltModels.ts';
import { defineRoute, type Route } from './routes.ts';
import { accepted, anyObject, environmentSchema, otherSourceSchema, stackSchema } from './schemas.ts';
import { found, type Shop } from './shop.ts';

const id = z.string().min(1).max(64);

const thicknessBody = z.object({
  studyId: id,
  caseIds: z.array(id).max(20).optional(),
  trajectoryIds: z.array(id).max(20).optional(),
  candidates: z
    .array(z.object({ name: z.string().min(1).max(200), stack: stackSchema, layerIndex: z.number().int().min(0) }))
    .min(1)
    .max(10),
  /** Either a dose, or the parts whose required margins are to be met. */
  targetDoseKradSi: z.number().positive().optional(),
  partIds: z.array(id).min(1).max(1000).optional(),
  /** Required margin of parts without their own; the study's when it is left out. */
  requiredRdm: z.number().min(1).max(100).optional(),
  percentile: z.union([z.number().min(50).max(99.9), z.literal('nominal')]).default('nominal'),
  minimumMm: z.number().positive().default(0.1),
  maximumMm: z.number().positive().max(500).default(25),
  areaM2: z.number().positive().max(1e4).optional(),
  innerBoxMm: z.tuple([z.number().positive(), z.number().positive(), z.number().positive()]).optional(),
  innerSphereRadiusMm: z.number().positive().max(1e4).optional(),
  otherSources: z.array(otherSourceSchema).max(50).default([]),
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
      summary: 'Thickness of one layer that meets a dose or the margins of parts, answered when it is found',
      body: thicknessBody,
      answer: anyObject,
      handler: async ({ body, response }) => {
        const abort = new AbortController();
        response.on('close', () => {
          if (!response.writableEnded) abort.abort(new Error('caller has gone'));
        });
        return shown(await runThickness(shop, snapshotOf(shop, body), { signal: abort.signal, progress: () => {} }));
      },
    }),
    defineRoute({
      method: 'post',
      path: '/api/thickness/jobs',
      tag: 'shielding',
      summary: 'The same as a job, with progress; the result is kept',
      body: thicknessBody,
      answer: accepted,
      status: 202,
      handler: ({ body, response }) => {
        const job = shop.runner.add('thickness', body.studyId, snapshotOf(shop, body));
        response.setHeader('Location', `/api/thickness/jobs/${job.id}`);
        return { id: job.id, jobId: job.id };
      },
    }),
    defineRoute({
      method: 'get',
      path: '/api/thickness/jobs/{id}',
      tag: 'shielding',
      summary: 'State of a search for a thickness and, once done, its result',
      answer: anyObject,
      handler: ({ params }) => {
        const job = shop.runner.rows.get(params.id);
        const { state, progress, message, problem, result, input } = found(
          job?.kind === 'thickness' ? job : undefined,
          'search for a thickness',
          params.id,
        );
        return {
          id: params.id,
          jobId: params.id,
          state,
          progress,
          message,
          problem: problem === null ? null : (JSON.parse(problem) as object),
          inputs: JSON.parse(input) as object,
          result: result === null ? null : shown(JSON.parse(result) as ThicknessResult),
        };
      },
    }),
  ];
}

/** Each solution with its stack in words and all three units. */
function shown(result: ThicknessResult): Record<string, unknown> {
  return {
    ...result,
    solutions: result.solutions.map((solution) => ({
      ...solution,
      stackText: describeStack(normaliseStack(solution.stack)),
    })),
  };
}

/** Copies and checks everything the search rests on; nothing is queued when anything is refused. */
function snapshotOf(shop: Shop, body: z.infer<typeof thicknessBody>): ThicknessSnapshot {
  const study = found(shop.studies.get(body.studyId), 'study', body.studyId);
  const refuse = (pointer: string, detail: string, got: number): never => {
    throw new AppError('REQUEST_INVALID', `${pointer}: ${detail}; got ${got}.`, [{ pointer, detail, got, limit: 1 }]);
  };
  const targets = [body.targetDoseKradSi, body.partIds].filter((value) => value !== undefined).length;
  if (targets !== 1) refuse('#/targetDoseKradSi', 'exactly one of targetDoseKradSi and partIds is needed', targets);
  const enclosed = (['areaM2', 'innerBoxMm', 'innerSphereRadiusMm'] as const).filter((key) => body[key] !== undefined);
  if (enclosed.length > 1) refuse(`#/${enclosed[1]}`, 'at most one size for the mass', enclosed.length);
  const cases = requestedCases(shop, body);
  const trajectoryIds = [...new Set(cases.flatMap(({ legs }) => legs.map(({ trajectoryId }) => trajectoryId)))];
  const candidates = body.candidates.map((candidate) => ({ ...candidate, stack: candidate.stack as StackInput }));
  for (const [index, { stack }] of candidates.entries()) normaliseStack(stack, `#/candidates/${index}/stack`);
  const snapshot: ThicknessSnapshot = {
    trajectories: trajectoryIds.map((one) => shop.storedTrajectory(one)),
    cases,
    otherSources: body.otherSources as OtherSourceInput[],
    sampling: body.sampling,
    target:
      body.partIds === undefined
        ? { doseKradSi: body.targetDoseKradSi! }
        : {
            parts: body.partIds.map((one) => found(shop.parts.get(one), 'part', one).body),
            requiredRdm: body.requiredRdm ?? study.body.requiredRdm,
          },
    percentile: body.percentile,
    phaseTreatment: study.body.phaseTreatment,
    candidates,
    minimumMm: body.minimumMm,
    maximumMm: body.maximumMm,
    enclosed: Object.fromEntries(enclosed.map((key) => [key, body[key]])),
    environment: withBeltTable(shop, body.environment as EnvironmentRequest),
  };
  checkThickness({ ...snapshot, trajectories: trajectoryIds.map((trajectoryId) => ({ trajectoryId })) });
  return snapshot;
}
