import { z } from 'zod';
import { AppError } from '../errors.ts';
import { checkParts, formatPartsCsv, type PartInput, parsePartsCsv } from '../margin/index.ts';
import { sendFile } from './documentRoutes.ts';
import { defineRoute, type Route } from './routes.ts';
import { anyObject, partFields } from './schemas.ts';
import { found, onWire, type Shop } from './shop.ts';

const listBody = z.object({ parts: z.array(partFields).min(1).max(1000) });
/** What happens to an id that the study has already: refused unless the list is said to replace it. */
const listQuery = z.object({ replace: z.enum(['true', 'false']).default('false') });

/** Whole parts lists, as CSV and as JSON: all of a list is kept, or nothing of it. */
export function partsListRoutes(shop: Shop): Route[] {
  const inStudy = (studyId: string) => found(shop.studies.get(studyId), 'study', studyId).id;
  const stored = (studyId: string) => shop.parts.list(studyId, 1000, null).items;
  const keep = (studyId: string, parts: readonly PartInput[], replace: boolean, place: (i: number) => object) => {
    const known = new Map(stored(studyId).map((document) => [document.body.partId, document]));
    const repeated = parts.flatMap((part, i) => (known.has(part.partId) ? [{ partId: part.partId, i }] : []));
    if (!replace && repeated.length > 0) {
      throw new AppError(
        'PART_INVALID',
        `The study has parts of these ids already: ${repeated.map(({ partId }) => `"${partId}"`).join(', ')}; send replace=true to replace them.`,
        repeated.map(({ partId, i }) => ({
          ...place(i),
          field: 'partId',
          detail: 'the study has a part of this id already',
          got: partId,
        })),
      );
    }
    return shop.store.transaction(() =>
      parts.map((part) => {
        const old = known.get(part.partId);
        const document =
          old === undefined
            ? shop.parts.insert(studyId, part.name, part)
            : found(shop.parts.update(old.id, part.name, part, old.version), 'part', old.id);
        return onWire(document);
      }),
    )();
  };
  return [
    defineRoute({
      method: 'post',
      path: '/api/studies/{id}/parts.csv',
      tag: 'parts',
      summary: 'Add a parts list as CSV; all of it or nothing',
      rawBody: 'text/csv',
      query: listQuery,
      answer: anyObject,
      status: 201,
      handler: ({ params, query, request }) => {
        const studyId = inStudy(params.id);
        const parts = parsePartsCsv(typeof request.body === 'string' ? request.body : '');
        checkParts(parts);
        return { items: keep(studyId, parts, query.replace === 'true', () => ({})) };
      },
    }),
    defineRoute({
      method: 'post',
      path: '/api/studies/{id}/parts.json',
      tag: 'parts',
      summary: 'Add a parts list as JSON; all of it or nothing',
      body: listBody,
      query: listQuery,
      answer: anyObject,
      status: 201,
      handler: ({ params, query, body }) => {
        const studyId = inStudy(params.id);
        const parts = body.parts as PartInput[];
        checkParts(parts);
        return {
          items: keep(studyId, parts, query.replace === 'true', (i) => ({ pointer: `#/parts/${i}/partId` })),
        };
      },
    }),
    defineRoute({
      method: 'get',
      path: '/api/studies/{id}/parts.csv',
      tag: 'parts',
      summary: 'The parts of a study as CSV',
      answerType: 'text/csv',
      handler: ({ params, response }) => {
        const parts = stored(inStudy(params.id)).map((document) => document.body);
        sendFile(response, 'text/csv; charset=utf-8', 'parts.csv', formatPartsCsv(parts));
      },
    }),
    defineRoute({
      method: 'get',
      path: '/api/studies/{id}/parts.json',
      tag: 'parts',
      summary: 'The parts of a study as JSON, as they can be sent again',
      answer: anyObject,
      handler: ({ params }) => ({ parts: stored(inStudy(params.id)).map((document) => document.body) }),
    }),
  ];
}
