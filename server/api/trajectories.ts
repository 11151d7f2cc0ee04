import { createReadStream } from 'node:fs';
import busboy from 'busboy';
import type { Request } from 'express';
import { z } from 'zod';
import { AppError } from '../errors.ts';
import { defaultFieldModel } from '../field/index.ts';
import { defaultRotationModel } from '../frames/rotation.ts';
import { parseEpoch } from '../time/index.ts';
import { sketchFlyby, sketchOrbit, type TrajectoryRequest } from '../trajectory/index.ts';
import { documentRoutes } from './documentRoutes.ts';
import { defineRoute, type Route } from './routes.ts';
import { anyObject, flybyBody, orbitBody } from './schemas.ts';
import { found, onWire, type Shop, type TrajectoryBody } from './shop.ts';

const MAX_FIELD_BYTES = 65_536;

const uploadFields = z.object({
  studyId: z.string().optional(),
  name: z.string().trim().min(1).max(200).optional(),
  planet: z.enum(['uranus', 'neptune']).optional(),
  targetId: z.coerce.number().int().optional(),
  columns: z
    .string()
    .transform((text, context) => {
      try {
        return JSON.parse(text) as unknown;
      } catch {
        context.addIssue({ code: 'custom', message: 'columns must be JSON' });
        return z.NEVER;
      }
    })
    .optional(),
});

export function trajectoryRoutes(shop: Shop, maxUploadBytes: number): Route[] {
  const shownTrajectory = (document: Parameters<typeof onWire<TrajectoryBody>>[0]) => {
    const { summary, ...wire } = onWire(document) as Record<string, unknown> & { summary: object };
    return { ...summary, ...wire };
  };
  const listed = documentRoutes({
    plural: 'trajectories',
    singular: 'trajectory',
    documents: shop.trajectories,
    schema: z.never(),
    toBody: () => ({ name: '', studyId: null, body: {} as TrajectoryBody }),
    shown: (document) => ({ ...document.body.summary, summary: undefined, request: undefined }),
    readOnly: true,
    beforeDelete: (id) => refuseWhileFlown(shop, id),
  });
  return [
    ...listed,
    defineRoute({
      method: 'post',
      path: '/api/trajectories',
      tag: 'trajectories',
      summary: 'Upload an ephemeris: multipart with the part file, then planet, name, targetId, columns where needed',
      rawBody: 'multipart/form-data',
      query: z.object({ dryRun: z.enum(['true', 'false']).default('false') }),
      answer: anyObject,
      handler: async ({ request, response, query }) => {
        const upload = await receive(request, shop, maxUploadBytes);
        let kept = false;
        try {
          const fields = uploadFields.safeParse(upload.fields);
          if (!fields.success) {
            const [issue] = fields.error.issues;
            throw new AppError('REQUEST_INVALID', `${issue.path.join('.')}: ${issue.message}.`, [
              { field: issue.path.join('.'), detail: issue.message },
            ]);
          }
          const { studyId, name, planet, targetId, columns } = fields.data;
          const asked = {
            ...(planet === undefined ? {} : { planet }),
            ...(targetId === undefined ? {} : { targetId }),
            ...(columns === undefined ? {} : { columns }),
          } as TrajectoryRequest;
          const read = await shop.pool.run({
            kind: 'readTrajectory',
            filePath: shop.blobs.path(upload.sha256),
            request: { ...asked, fileName: upload.fileName, ...(name === undefined ? {} : { name }) },
          });
          if (query.dryRun === 'true') return { ...read.summary, name: name ?? read.summary.name };
          const study = found(shop.studies.get(studyId ?? ''), 'study', studyId ?? '');
          kept = true;
          const document = shop.trajectories.insert(
            study.id,
            name ?? read.summary.name,
            { ...read, request: asked } as TrajectoryBody,
            { blobSha256: upload.sha256 },
          );
          response.status(201).setHeader('Location', `/api/trajectories/${document.id}`);
          return shownTrajectory(document);
        } finally {
          if (!kept && !blobInUse(shop, upload.sha256)) shop.blobs.remove(upload.sha256);
        }
      },
    }),
    ...sketchRoutes(shop, shownTrajectory),
    defineRoute({
      method: 'get',
      path: '/api/trajectories/{id}/source',
      tag: 'trajectories',
      summary: 'The original bytes, as uploaded',
      answerType: 'application/octet-stream',
      handler: ({ params, response }) => {
        const trajectory = shop.storedTrajectory(params.id);
        response.setHeader('Content-Type', 'application/octet-stream');
        response.setHeader('Content-Disposition', 'attachment; filename="ephemeris"');
        response.setHeader('ETag', `"${trajectory.blobSha256}"`);
        createReadStream(shop.blobs.path(trajectory.blobSha256)).pipe(response);
      },
    }),
    defineRoute({
      method: 'get',
      path: '/api/trajectories/{id}/path',
      tag: 'trajectories',
      summary: 'The path sampled in time, with its field coordinates',
      query: z.object({
        fieldModelId: z.string().optional(),
        rotationModelId: z.string().optional(),
        offsetDeg: z.coerce.number().min(-360).max(360).default(0),
        stepS: z.coerce.number().positive().optional(),
        maxPoints: z.coerce.number().int().min(2).max(20_000).default(2000),
      }),
      answer: anyObject,
      handler: ({ params, query }) => {
        const trajectory = shop.storedTrajectory(params.id);
        return shop.pool.run({
          kind: 'samplePath',
          filePath: shop.blobs.path(trajectory.blobSha256),
          request: trajectory.request,
          fieldModelId: query.fieldModelId ?? defaultFieldModel(trajectory.planet).id,
          rotationModelId: query.rotationModelId ?? defaultRotationModel(trajectory.planet).id,
          offsetDeg: query.offsetDeg,
          stepS: query.stepS ?? null,
          maxPoints: query.maxPoints,
        });
      },
    }),
    defineRoute({
      method: 'get',
      path: '/api/trajectories/{id}/encounter',
      tag: 'trajectories',
      summary:
        'What a picture of the encounter shows: path, axes, field lines and Sun at closest approach, ICRF, planet radii',
      query: z.object({
        fieldModelId: z.string().optional(),
        rotationModelId: z.string().optional(),
        offsetDeg: z.coerce.number().min(-360).max(360).default(0),
      }),
      answer: anyObject,
      handler: ({ params, query }) => {
        const trajectory = shop.storedTrajectory(params.id);
        const { summary } = found(shop.trajectories.get(params.id), 'trajectory', params.id).body;
        const [closest] = [...summary.closestApproaches].sort((a, b) => a.radiusKm - b.radiusKm);
        return shop.pool.run({
          kind: 'encounter',
          filePath: shop.blobs.path(trajectory.blobSha256),
          request: trajectory.request,
          fieldModelId: query.fieldModelId ?? defaultFieldModel(trajectory.planet).id,
          rotationModelId: query.rotationModelId ?? defaultRotationModel(trajectory.planet).id,
          offsetDeg: query.offsetDeg,
          closestTdbS: closest === undefined ? trajectory.startTdbS : parseEpoch(closest.utc, 'UTC'),
        });
      },
    }),
  ];
}

function sketchRoutes(shop: Shop, shown: (document: ReturnType<Shop['trajectories']['insert']>) => object): Route[] {
  const keep = async (oem: string, studyId: string, name: string) => {
    const study = found(shop.studies.get(studyId), 'study', studyId);
    const sha256 = shop.blobs.put(Buffer.from(oem));
    const read = await shop.pool.run({ kind: 'readTrajectory', filePath: shop.blobs.path(sha256), request: { name } });
    return shown(
      shop.trajectories.insert(study.id, name, { ...read, request: {} } as TrajectoryBody, { blobSha256: sha256 }),
    );
  };
  return [
    defineRoute({
      method: 'post',
      path: '/api/trajectories/flyby',
      tag: 'trajectories',
      summary: 'Sketch a flyby from periapsis, v∞ and orientation, or from the v∞ vector and its point in the B-plane',
      body: flybyBody,
      answer: anyObject,
      status: 201,
      handler: ({ body }) => {
        const { studyId, limitPlanetRadii, ...sketch } = body;
        const { oem } = sketchFlyby({ ...sketch, ...(limitPlanetRadii === undefined ? {} : { limitPlanetRadii }) });
        return keep(oem, studyId, sketch.name);
      },
    }),
    defineRoute({
      method: 'post',
      path: '/api/trajectories/orbit',
      tag: 'trajectories',
      summary: 'Sketch an orbit from periapsis, period or apoapsis, and orientation',
      body: orbitBody,
      answer: anyObject,
      status: 201,
      handler: ({ body }) => {
        const { studyId, periodDays, apoapsisPlanetRadii, passes, ...sketch } = body;
        const { oem } = sketchOrbit({
          ...sketch,
          ...(periodDays === undefined ? {} : { periodDays }),
          ...(apoapsisPlanetRadii === undefined ? {} : { apoapsisPlanetRadii }),
          ...(passes === undefined ? {} : { passes }),
        });
        return keep(oem, studyId, sketch.name);
      },
    }),
  ];
}

/** @throws {AppError} CONFLICT naming the cases that fly the trajectory */
function refuseWhileFlown(shop: Shop, trajectoryId: string): void {
  const studyId = shop.trajectories.get(trajectoryId)?.studyId ?? null;
  const users: { readonly id: string; readonly name: string }[] = [];
  let cursor: string | null = null;
  do {
    const page: ReturnType<typeof shop.cases.list> = shop.cases.list(studyId, 500, cursor);
    users.push(...page.items.filter(({ body }) => body.legs.some((leg) => leg.trajectoryId === trajectoryId)));
    cursor = page.nextCursor;
  } while (cursor !== null);
  if (users.length === 0) return;
  throw new AppError(
    'CONFLICT',
    `This trajectory is flown by ${users.map(({ name }) => `"${name}"`).join(', ')}; delete those cases or take it out of them first.`,
    users.map(({ id, name }) => ({ field: 'caseId', detail: `the case "${name}" flies it`, got: id })),
  );
}

function blobInUse(shop: Shop, sha256: string): boolean {
  return shop.store.prepare('SELECT 1 FROM trajectories WHERE blobSha256 = ?').get(sha256) !== undefined;
}

/** Streams the file part to a blob; other parts are fields. Nothing is kept of an upload that is cut short or too large. */
async function receive(
  request: Request,
  shop: Shop,
  maxBytes: number,
): Promise<{ sha256: string; fileName: string; fields: Record<string, string> }> {
  const unreadable = (detail: string, cause?: unknown) =>
    new AppError('BODY_UNREADABLE', detail, [{ field: 'file', detail }], { cause });
  let parser: busboy.Busboy;
  try {
    parser = busboy({ headers: request.headers, limits: { files: 1, fields: 20, fieldSize: MAX_FIELD_BYTES } });
  } catch (cause) {
    throw unreadable('The body must be multipart/form-data with a part named file.', cause);
  }
  const fields: Record<string, string> = {};
  let fileName = '';
  let storing: Promise<{ sha256: string } | null> | null = null;
  return new Promise((resolve, reject) => {
    const fail = (error: unknown) => {
      request.unpipe(parser);
      request.resume();
      reject(error);
    };
    parser.on('field', (name, value) => {
      fields[name] = value;
    });
    parser.on('file', (name, stream, info) => {
      if (name !== 'file') {
        stream.resume();
        return;
      }
      fileName = info.filename ?? '';
      storing = shop.blobs.putStream(stream, maxBytes);
      storing.catch(fail);
      storing.then((stored) => {
        if (stored === null) {
          fail(
            new AppError('TOO_LARGE', `The file is larger than ${maxBytes / 1e6} MB.`, [
              { field: 'file', detail: 'too large', limit: maxBytes / 1e6, unit: 'MB' },
            ]),
          );
        }
      }, fail);
    });
    parser.on('error', (cause) => fail(unreadable('The multipart body is damaged.', cause)));
    request.on('aborted', () => parser.destroy(new Error('upload cut short')));
    parser.on('close', async () => {
      if (storing === null) {
        fail(unreadable('The multipart body has no part named file.'));
        return;
      }
      const stored = await storing.catch(() => null);
      if (stored !== null) resolve({ sha256: stored.sha256, fileName, fields });
    });
    request.pipe(parser);
  });
}
