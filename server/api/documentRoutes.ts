import type { Request, Response } from 'express';
import type { z } from 'zod';
import type { Documents, StoredDocument } from '../../db/documents.ts';
import { AppError } from '../errors.ts';
import { defineRoute, type Route } from './routes.ts';
import { anyObject, page, pageQuery } from './schemas.ts';
import { found, onWire } from './shop.ts';

export interface DocumentKind<T extends object, B> {
  /** Path segment, and the singular for messages. */
  readonly plural: string;
  readonly singular: string;
  readonly documents: Documents<T>;
  readonly schema: z.ZodType<B>;
  /** Checks what the schema cannot and returns what is stored; everything is refused before anything is written. */
  readonly toBody: (body: B) => { readonly name: string; readonly studyId: string | null; readonly body: T };
  /** More fields for one item on the wire. */
  readonly shown?: (document: StoredDocument<T>) => Record<string, unknown>;
  readonly readOnly?: boolean;
  /** Refuses the deletion of something that is still in use. */
  readonly beforeDelete?: (id: string) => void;
}

/** The calls every collection has: list, make, read, change (ETag and If-Match), delete. */
export function documentRoutes<T extends object, B>(kind: DocumentKind<T, B>): Route[] {
  const { documents, plural, singular } = kind;
  const tag = plural;
  const shown = (document: StoredDocument<T>) => ({ ...onWire(document), ...kind.shown?.(document) });
  const routes: Route[] = [
    defineRoute({
      method: 'get',
      path: `/api/${plural}`,
      tag,
      summary: `List ${plural}`,
      query: pageQuery,
      answer: page,
      handler: ({ query }) => {
        const { items, nextCursor } = documents.list(query.studyId ?? null, query.limit, query.cursor ?? null);
        return { items: items.map(shown), nextCursor };
      },
    }),
    defineRoute({
      method: 'get',
      path: `/api/${plural}/{id}`,
      tag,
      summary: `Read one ${singular}`,
      answer: anyObject,
      handler: ({ params, response }) => {
        const document = found(documents.get(params.id), singular, params.id);
        response.setHeader('ETag', etag(document.version));
        return shown(document);
      },
    }),
    defineRoute({
      method: 'delete',
      path: `/api/${plural}/{id}`,
      tag,
      summary: `Delete one ${singular}`,
      handler: ({ params, response }) => {
        kind.beforeDelete?.(params.id);
        found(documents.delete(params.id) || undefined, singular, params.id);
        response.status(204).end();
      },
    }),
  ];
  if (kind.readOnly === true) return routes;
  routes.push(
    defineRoute({
      method: 'post',
      path: `/api/${plural}`,
      tag,
      summary: `Make a ${singular}`,
      body: kind.schema,
      answer: anyObject,
      status: 201,
      handler: ({ body, response }) => {
        const made = kind.toBody(body);
        const document = documents.insert(made.studyId, made.name, made.body);
        response.setHeader('Location', `/api/${plural}/${document.id}`);
        response.setHeader('ETag', etag(document.version));
        return shown(document);
      },
    }),
    defineRoute({
      method: 'put',
      path: `/api/${plural}/{id}`,
      tag,
      summary: `Change a ${singular}`,
      body: kind.schema,
      answer: anyObject,
      handler: ({ params, body, request, response }) => {
        const old = found(documents.get(params.id), singular, params.id);
        requireVersion(request, old.version);
        const made = kind.toBody(body);
        const document = documents.update(params.id, made.name, made.body, old.version);
        response.setHeader('ETag', etag(old.version + 1));
        return shown(found(document, singular, params.id));
      },
    }),
  );
  return routes;
}

export function etag(version: number): string {
  return `"${version}"`;
}

/** @throws {AppError} VERSION_MISMATCH when If-Match is given and is not the stored version */
function requireVersion(request: Request, version: number): void {
  const given = request.headers['if-match'];
  if (given !== undefined && given !== '*' && given !== etag(version)) {
    throw new AppError('VERSION_MISMATCH', `If-Match is ${given}; the stored version is ${etag(version)}.`, [
      { field: 'If-Match', detail: 'not the stored version', got: given, limit: etag(version) },
    ]);
  }
}

export function sendFile(response: Response, type: string, fileName: string, body: string | Uint8Array): void {
  response.setHeader('Content-Type', type);
  response.setHeader('Content-Disposition', `attachment; filename="${fileName.replaceAll(/[^\w.-]+/g, '_')}"`);
  response.end(body);
}
