import { readFile } from 'node:fs/promises';
import { z } from 'zod';
import type { StoredDocument } from '../../db/documents.ts';
import { AppError } from '../errors.ts';
import { BELT_MODEL_IDS, type BeltTable, beltModel, checkBeltTable, tableBelts } from '../flux/index.ts';
import type { EnvironmentRequest } from '../jobs/environment.ts';
import { defineRoute, type Route } from './routes.ts';
import { anyObject, page, pageQuery } from './schemas.ts';
import { found, type Shop } from './shop.ts';

/** What is kept of a belt table beside its blob: what lists show. */
export interface BeltTableBody {
  readonly sha256: string;
  readonly planet: BeltTable['planet'];
  readonly source: string;
  readonly validity: string;
  readonly species: readonly string[];
  readonly lMin: number;
  readonly lMax: number;
}

const block = z
  .object({
    lShells: z.array(z.number()),
    equatorialPitchAnglesDeg: z.array(z.number()),
    energiesMeV: z.array(z.number()),
    intensityPerCm2SSrMeV: z.array(z.array(z.array(z.number()))),
    sigmaDex: z.array(z.number()).optional(),
  })
  .strict();

const beltTableBody = z
  .object({
    name: z.string().trim().min(1).max(200),
    planet: z.enum(['uranus', 'neptune']),
    source: z.string().trim().min(1).max(2000),
    validity: z.string().trim().min(1).max(2000),
    species: z.object({ electron: block.optional(), proton: block.optional() }).strict(),
  })
  .strict();

/** Built-in belts and those of the user, listed together with their sources. */
export function beltModelRoutes(shop: Shop): Route[] {
  return [
    defineRoute({
      method: 'get',
      path: '/api/belt-models',
      tag: 'environment',
      summary: 'Trapped-particle models: the built-in ones first, then uploaded belt tables',
      query: pageQuery,
      answer: page,
      handler: ({ query }) => {
        const { items, nextCursor } = shop.beltTables.list(null, query.limit, query.cursor ?? null);
        const builtIn = query.cursor === undefined ? BELT_MODEL_IDS.map(shownBuiltIn) : [];
        return { items: [...builtIn, ...items.map(shownTable)], nextCursor };
      },
    }),
    defineRoute({
      method: 'post',
      path: '/api/belt-models',
      tag: 'environment',
      summary:
        'Store a belt table: differential unidirectional flux, cm^-2 s^-1 sr^-1 MeV^-1, on axes of L, equatorial pitch angle and energy',
      body: beltTableBody,
      answer: anyObject,
      status: 201,
      handler: ({ body, response }) => {
        const table = body as BeltTable;
        checkBeltTable(table);
        const { lMin, lMax, species } = tableBelts('', table);
        const sha256 = shop.blobs.put(Buffer.from(JSON.stringify(table)));
        const { planet, source, validity } = table;
        const made = shop.beltTables.insert(null, table.name, {
          sha256,
          planet,
          source,
          validity,
          species,
          lMin,
          lMax,
        });
        response.setHeader('Location', `/api/belt-models/${made.id}`);
        return shownTable(made);
      },
    }),
    defineRoute({
      method: 'get',
      path: '/api/belt-models/{id}',
      tag: 'environment',
      summary: 'One trapped-particle model; an uploaded belt table with its numbers',
      answer: anyObject,
      handler: async ({ params }) => {
        if (BELT_MODEL_IDS.includes(params.id)) return shownBuiltIn(params.id);
        const document = found(shop.beltTables.get(params.id), 'belt model', params.id);
        return { ...shownTable(document), table: await storedTable(shop, document.body.sha256) };
      },
    }),
    defineRoute({
      method: 'delete',
      path: '/api/belt-models/{id}',
      tag: 'environment',
      summary: 'Delete an uploaded belt table; assessments made with it keep theirs',
      handler: ({ params, response }) => {
        if (BELT_MODEL_IDS.includes(params.id)) {
          throw new AppError('CONFLICT', `Belt model "${params.id}" is built in and stays.`, [
            { field: 'id', detail: 'built in', got: params.id },
          ]);
        }
        found(shop.beltTables.delete(params.id) || undefined, 'belt model', params.id);
        response.status(204).end();
      },
    }),
  ];
}

/**
 * Adds to a request which table its belt model id means, by content, so that what rests on it outlives its deletion.
 *
 * @throws {AppError} BELT_OPTION_REFUSED when a scenario of the built-in belts is asked of a table
 */
export function withBeltTable(shop: Shop, request: EnvironmentRequest): EnvironmentRequest {
  const { beltModelId } = request;
  const document = beltModelId === undefined ? undefined : shop.beltTables.get(beltModelId);
  if (document === undefined) return request;
  const refused = [
    ['satelliteDips', request.satelliteDips === true],
    ['protonUpperBound', request.protonUpperBound === true],
    ['solarWindState', request.solarWindState === 'long-term-mean'],
  ].find(([, asked]) => asked);
  if (refused !== undefined) {
    const field = String(refused[0]);
    throw new AppError('BELT_OPTION_REFUSED', `${field} does not apply to the belt table "${document.name}".`, [
      { field, detail: 'a scenario of the built-in belts', got: request[field as 'satelliteDips'] ?? null },
    ]);
  }
  return { ...request, beltTable: { planet: document.body.planet, sha256: document.body.sha256 } };
}

export async function storedTable(shop: Pick<Shop, 'blobs'>, sha256: string): Promise<BeltTable> {
  return JSON.parse(await readFile(shop.blobs.path(sha256), 'utf8')) as BeltTable;
}

function shownBuiltIn(id: string): object {
  const { planet, label, source, lMin, lMax, species } = beltModel(id);
  return { id, planet, label, source, lMin, lMax, species, builtIn: true };
}

function shownTable({ id, name, createdUtc, body }: StoredDocument<BeltTableBody>): object {
  return { id, label: name, createdUtc, builtIn: false, ...body };
}
