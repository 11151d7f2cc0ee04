import { createReadStream } from 'node:fs';
import { readFile } from 'node:fs/promises';
import type { z } from 'zod';
import type { JobRow } from '../../db/jobs.ts';
import { checkOtherSource, type OtherSourceInput } from '../dose/index.ts';
import { AppError } from '../errors.ts';
import type { AssessmentSnapshot, SnapshotOption } from '../jobs/snapshot.ts';
import { type AssessedCase, type AssessmentResult, checkParts } from '../margin/index.ts';
import { withBeltTable } from './beltModels.ts';
import { documentRoutes, sendFile } from './documentRoutes.ts';
import { resultCsv } from './resultCsv.ts';
import { defineRoute, type Route } from './routes.ts';
import { accepted, anyObject, assessmentBody } from './schemas.ts';
import { type AssessmentBody, found, onWire, type Shop } from './shop.ts';

export type AssessmentRequest = z.infer<typeof assessmentBody>;

export function assessmentRoutes(shop: Shop): Route[] {
  const stateOf = (body: AssessmentBody) => {
    const job = shop.runner.rows.get(body.jobId);
    return {
      state: job?.state ?? 'failed',
      progress: job?.progress ?? 0,
      message: job?.message ?? '',
      problem: job?.problem == null ? null : (JSON.parse(job.problem) as object),
    };
  };
  const listed = documentRoutes<AssessmentBody, never>({
    plural: 'assessments',
    singular: 'assessment',
    documents: shop.assessments,
    schema: assessmentBody as never,
    toBody: () => {
      throw new TypeError('assessments are made by their own call');
    },
    shown: (document) => ({ ...stateOf(document.body), snapshot: undefined }),
    readOnly: true,
  }).filter((route) => !(route.method === 'get' && route.path.endsWith('{id}')));
  return [
    ...listed,
    defineRoute({
      method: 'post',
      path: '/api/assessments',
      tag: 'assessments',
      summary: 'Assess cases × options × parts in one environment',
      body: assessmentBody,
      answer: accepted,
      status: 202,
      handler: ({ body, response }) => {
        const made = startAssessment(shop, body);
        response.setHeader('Location', `/api/assessments/${made.id}`);
        return made;
      },
    }),
    defineRoute({
      method: 'get',
      path: '/api/assessments/{id}',
      tag: 'assessments',
      summary: 'State of an assessment and, once done, its result',
      answer: anyObject,
      handler: async ({ params }) => {
        const document = found(shop.assessments.get(params.id), 'assessment', params.id);
        const { snapshot, ...wire } = onWire(document) as Record<string, unknown> & AssessmentBody;
        const state = stateOf(document.body);
        const result = state.state === 'done' ? await resultOf(shop, params.id) : null;
        return { ...wire, ...state, inputs: snapshot, result };
      },
    }),
    defineRoute({
      method: 'get',
      path: '/api/assessments/{id}/result.json',
      tag: 'assessments',
      summary: 'The whole result as a file',
      answer: anyObject,
      handler: ({ params, response }) => {
        const path = resultPath(shop, params.id);
        response.setHeader('Content-Type', 'application/json; charset=utf-8');
        response.setHeader('Content-Disposition', 'attachment; filename="result.json"');
        createReadStream(path).pipe(response);
      },
    }),
    defineRoute({
      method: 'get',
      path: '/api/assessments/{id}/table.csv',
      tag: 'assessments',
      summary: 'Doses and margins as a table, units in the columns',
      answerType: 'text/csv',
      handler: async ({ params, response }) => {
        sendFile(
          response,
          'text/csv; charset=utf-8',
          'doses-and-margins.csv',
          resultCsv(await resultOf(shop, params.id)),
        );
      },
    }),
  ];
}

function doneJob(shop: Shop, assessmentId: string): JobRow {
  const document = found(shop.assessments.get(assessmentId), 'assessment', assessmentId);
  const job = shop.runner.rows.get(document.body.jobId);
  if (job?.state !== 'done' || job.result === null) {
    throw new AppError(
      'CONFLICT',
      `Assessment ${assessmentId} is ${job?.state ?? 'unknown'}; only one that is done has a result.`,
      [{ field: 'state', detail: 'not done', got: job?.state ?? null, limit: 'done' }],
    );
  }
  return job;
}

export function resultPath(shop: Shop, assessmentId: string): string {
  return shop.blobs.path((JSON.parse(doneJob(shop, assessmentId).result!) as { resultPath: string }).resultPath);
}

/** @throws {AppError} CONFLICT unless the assessment is done */
export async function resultOf(shop: Shop, assessmentId: string): Promise<AssessmentResult> {
  return JSON.parse(await readFile(resultPath(shop, assessmentId), 'utf8')) as AssessmentResult;
}

function needOne(field: string, first: readonly string[] | undefined, second: readonly string[] | undefined): void {
  if ((first?.length ?? 0) + (second?.length ?? 0) === 0) {
    throw new AppError('REQUEST_INVALID', `${field}: at least one is needed.`, [
      { pointer: `#/${field}`, field, detail: 'at least one is needed', got: 0, limit: 1 },
    ]);
  }
}

/**
 * The cases of a request; a trajectory alone is a case of one leg.
 *
 * @throws {AppError} REQUEST_INVALID when there is none, NOT_FOUND for an unknown id
 */
export function requestedCases(
  shop: Shop,
  request: { readonly caseIds?: string[] | undefined; readonly trajectoryIds?: string[] | undefined },
): AssessedCase[] {
  needOne('caseIds', request.caseIds, request.trajectoryIds);
  return [
    ...(request.caseIds ?? []).map((id) => {
      const document = found(shop.cases.get(id), 'case', id);
      return { caseId: id, name: document.name, legs: document.body.legs };
    }),
    ...(request.trajectoryIds ?? []).map((id) => {
      const document = found(shop.trajectories.get(id), 'trajectory', id);
      return { caseId: id, name: document.name, legs: [{ trajectoryId: id, repetitions: 1 }] };
    }),
  ];
}

/** Takes the snapshot, checks it whole, and queues the job; nothing is written when anything is refused. */
export function startAssessment(shop: Shop, request: AssessmentRequest): { id: string; jobId: string } {
  const study = found(shop.studies.get(request.studyId), 'study', request.studyId);
  needOne('optionIds', request.optionIds, request.stackIds);

  const cases = requestedCases(shop, request);
  const trajectoryIds = [...new Set(cases.flatMap((entry) => entry.legs.map((leg) => leg.trajectoryId)))];
  const options: SnapshotOption[] = [
    ...(request.optionIds ?? []).map((id) => {
      const document = found(shop.options.get(id), 'option', id);
      return { optionId: id, name: document.name, places: document.body.places };
    }),
    ...(request.stackIds ?? []).map((id) => {
      const document = found(shop.stacks.get(id), 'stack', id);
      const { geometry, innerRadiusMm, backing, layers } = document.body;
      const stack = {
        geometry,
        layers,
        ...(innerRadiusMm === undefined ? {} : { innerRadiusMm }),
        ...(backing === undefined ? {} : { backing }),
      };
      return {
        optionId: id,
        name: document.name,
        places: [
          { placeId: 'all', name: document.name, shield: { kind: 'stack' as const, stack }, holdsAllParts: true },
        ],
      };
    }),
  ];
  const allParts = shop.parts.list(study.id, 1000, null).items;
  const parts =
    request.partIds === undefined
      ? allParts.map((document) => document.body)
      : request.partIds.map((id) => found(shop.parts.get(id), 'part', id).body);
  checkParts(parts);
  const otherSources = request.otherSources as OtherSourceInput[];
  otherSources.forEach((source, index) => {
    checkOtherSource(source, `#/otherSources/${index}`);
  });
  const snapshot: AssessmentSnapshot = {
    study: {
      studyId: study.id,
      name: study.name,
      requiredRdm: request.requiredRdm ?? study.body.requiredRdm,
      verdictPercentile: request.verdictPercentile ?? study.body.verdictPercentile,
      phaseTreatment: study.body.phaseTreatment,
      extrapolatedShareLimit: study.body.extrapolatedShareLimit,
    },
    trajectories: trajectoryIds.map((id) => shop.storedTrajectory(id)),
    cases,
    options,
    parts,
    otherSources,
    sampling: request.sampling,
    environment: withBeltTable(shop, request.environment as AssessmentSnapshot['environment']),
    ...(request.baselineOptionId === undefined ? {} : { baselineOptionId: request.baselineOptionId }),
    ...(request.sensitivity === undefined ? {} : { sensitivity: request.sensitivity }),
    ...(request.otherTargetMaterialIds === undefined
      ? {}
      : { otherTargetMaterialIds: [...new Set(request.otherTargetMaterialIds)] }),
  };
  return shop.store.transaction(() => {
    const document = shop.assessments.insert(study.id, request.name, { jobId: '', snapshot });
    const job = shop.runner.add('assessment', document.id, { id: document.id });
    shop.assessments.update(document.id, request.name, { jobId: job.id, snapshot }, document.version);
    return { id: document.id, jobId: job.id };
  })();
}
