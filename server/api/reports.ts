import { createReadStream } from 'node:fs';
import { readReferenceJson } from '../constants/reference.ts';
import { FIELD_MODELS, isFieldModelId } from '../field/index.ts';
import { beltModel, tableBelts } from '../flux/index.ts';
import { isRotationModelId, phaseSigmaDeg, ROTATION_MODELS } from '../frames/rotation.ts';
import { compareAssessments } from '../margin/index.ts';
import type { EvidenceRow, ReportInput } from '../report/types.ts';
import { resultOf } from './assessments.ts';
import { storedTable } from './beltModels.ts';
import { documentRoutes } from './documentRoutes.ts';
import { defineRoute, type Route } from './routes.ts';
import { anyObject, page, reportBody } from './schemas.ts';
import { found, onWire, type ReportBody, type Shop } from './shop.ts';

export function reportRoutes(shop: Shop): Route[] {
  return [
    ...documentRoutes<ReportBody, never>({
      plural: 'reports',
      singular: 'report',
      documents: shop.reports,
      schema: reportBody as never,
      toBody: () => {
        throw new TypeError('reports are issued by their own call');
      },
      readOnly: true,
    }),
    defineRoute({
      method: 'post',
      path: '/api/reports',
      tag: 'reports',
      summary: 'Issue a report of an assessment: rendered once, kept unchanged',
      body: reportBody,
      answer: anyObject,
      status: 201,
      handler: async ({ body, response }) => {
        const assessment = found(shop.assessments.get(body.assessmentId), 'assessment', body.assessmentId);
        const result = await resultOf(shop, body.assessmentId);
        const previous = body.previousReportId;
        const before = previous === undefined ? null : found(shop.reports.get(previous), 'report', previous);
        const input: ReportInput = {
          ...body,
          dateIso: body.dateUtc,
          result,
          trajectories: assessment.body.snapshot.trajectories.map((trajectory) => {
            const stored = shop.trajectories.get(trajectory.id);
            return {
              trajectoryId: trajectory.id,
              name: trajectory.name,
              sha256: trajectory.blobSha256,
              summary: stored?.body.summary ?? null,
            };
          }),
          environments: await environmentsOf(shop, result),
          evidence: evidenceRows(),
          previous:
            before === null
              ? null
              : {
                  documentNumber: before.body.documentNumber,
                  issue: before.body.issue,
                  comparison: compareAssessments(await resultOf(shop, before.body.assessmentId), result),
                },
        };
        const pdf = await shop.pool.run({ kind: 'report', input });
        const pdfSha256 = shop.blobs.put(pdf);
        const document = shop.reports.insert(assessment.studyId, body.title, {
          assessmentId: body.assessmentId,
          documentNumber: body.documentNumber,
          issue: body.issue,
          dateUtc: body.dateUtc,
          pdfSha256,
          resultSha256: result.provenance.resultSha256,
        });
        response.setHeader('Location', `/api/reports/${document.id}`);
        return onWire(document);
      },
    }),
    defineRoute({
      method: 'get',
      path: '/api/reports/{id}/report.pdf',
      tag: 'reports',
      summary: 'The issued PDF',
      answerType: 'application/pdf',
      handler: ({ params, response }) => {
        const { body } = found(shop.reports.get(params.id), 'report', params.id);
        response.setHeader('Content-Type', 'application/pdf');
        response.setHeader('ETag', `"${body.pdfSha256}"`);
        response.setHeader(
          'Content-Disposition',
          `inline; filename="${body.documentNumber.replaceAll(/[^\w.-]+/g, '_')}.pdf"`,
        );
        createReadStream(shop.blobs.path(body.pdfSha256)).pipe(response);
      },
    }),
    defineRoute({
      method: 'get',
      path: '/api/evidence',
      tag: 'service',
      summary: 'Outside checks of the numbers: what, source, ours, published, tolerance',
      answer: page,
      handler: () => ({ items: evidenceRows(), nextCursor: null }),
    }),
  ];
}

export function evidenceRows(): EvidenceRow[] {
  return readReferenceJson<EvidenceRow[]>('evidence', 'checks.json');
}

async function environmentsOf(
  shop: Shop,
  result: Awaited<ReturnType<typeof resultOf>>,
): Promise<ReportInput['environments']> {
  return Promise.all(
    result.trajectories.map(async ({ trajectoryId, environment }) => {
      const { fieldModelId, rotationModelId, beltModelId, phase } = environment;
      const { beltTableSha256 } = environment;
      const belts =
        beltTableSha256 === undefined
          ? beltModel(beltModelId)
          : tableBelts(beltModelId, await storedTable(shop, beltTableSha256));
      const rotation = isRotationModelId(rotationModelId) ? ROTATION_MODELS[rotationModelId] : null;
      return {
        trajectoryId,
        field: isFieldModelId(fieldModelId)
          ? { id: fieldModelId, label: FIELD_MODELS[fieldModelId].label, source: FIELD_MODELS[fieldModelId].source }
          : null,
        rotation:
          rotation === null
            ? null
            : {
                id: rotation.id,
                label: rotation.label,
                source: rotation.source,
                periodH: rotation.periodH,
                periodErrorH: rotation.periodErrorH,
                sigmaDegPerYear: phaseSigmaDeg(rotation, rotation.anchorTdbS + 365.25 * 86_400),
              },
        belts: { id: beltModelId, label: belts.label, source: belts.source },
        phaseMode: phase.mode,
      };
    }),
  );
}
