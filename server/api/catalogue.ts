import { z } from 'zod';
import { PLANETS } from '../constants/planets.ts';
import { ERROR_CODES, type ErrorCode } from '../errors.ts';
import { FIELD_MODELS, fieldModel } from '../field/index.ts';
import { ROTATION_MODELS } from '../frames/rotation.ts';
import { materials } from '../matter/index.ts';
import { ENGINE_VERSION } from '../version.ts';
import { problemType } from './problem.ts';
import { defineRoute, type Route } from './routes.ts';
import { adiabaticityQuery, anyObject, fieldBody, page } from './schemas.ts';
import { found, type Shop } from './shop.ts';

/** L of the rows on adiabaticity, reference radii: the belts and a little beyond. */
const ADIABATICITY_L = [2, 3, 4, 5, 6, 7, 8, 10, 12, 15, 18];

/** What the environment and the shields are made of, with sources; health; what a problem means. */
export function catalogueRoutes(shop: Shop): Route[] {
  const whole = (items: readonly object[]) => ({ items, nextCursor: null });
  return [
    defineRoute({
      method: 'get',
      path: '/api/health',
      tag: 'service',
      summary: 'Liveness and version',
      answer: anyObject,
      handler: () => ({ status: 'ok', engineVersion: ENGINE_VERSION, nodeVersion: process.version }),
    }),
    defineRoute({
      method: 'get',
      path: '/api/planets',
      tag: 'environment',
      summary: 'Planets with their constants and sources',
      answer: page,
      handler: () => whole(Object.values(PLANETS)),
    }),
    defineRoute({
      method: 'get',
      path: '/api/field-models',
      tag: 'environment',
      summary: 'Magnetic field models',
      answer: page,
      handler: () =>
        whole(
          Object.values(FIELD_MODELS).map(({ id, planet, label, source, referenceRadiusKm, dipoleMomentNt }) => ({
            id,
            planet,
            label,
            source,
            referenceRadiusKm,
            dipoleMomentNt,
          })),
        ),
    }),
    defineRoute({
      method: 'get',
      path: '/api/field-models/{id}/adiabaticity',
      tag: 'environment',
      summary: 'Gyration, bounce and drift periods by L, and the energy above which L describes no particle',
      query: adiabaticityQuery,
      answer: page,
      handler: ({ params, query }) => {
        const { id: fieldModelId } = fieldModel(params.id);
        return shop.pool.run({ kind: 'adiabaticity', fieldModelId, lShells: ADIABATICITY_L, ...query });
      },
    }),
    defineRoute({
      method: 'get',
      path: '/api/rotation-models',
      tag: 'environment',
      summary: 'Rotation models',
      answer: page,
      handler: () =>
        whole(
          Object.values(ROTATION_MODELS).map(({ id, planet, label, source, periodH, periodErrorH }) => ({
            id,
            planet,
            label,
            source,
            periodH,
            periodErrorH,
          })),
        ),
    }),
    defineRoute({
      method: 'get',
      path: '/api/materials',
      tag: 'shielding',
      summary: 'Materials for layers',
      answer: page,
      handler: () =>
        whole(
          materials().map(({ id, name, densityGPerCm3, constituents, source }) => ({
            id,
            name,
            densityGPerCm3,
            massFractions: Object.fromEntries(constituents.map((part) => [part.symbol, part.massFraction])),
            source,
          })),
        ),
    }),
    defineRoute({
      method: 'post',
      path: '/api/field/evaluate',
      tag: 'environment',
      summary: 'Field, L, B_min, footpoints and trapping at points, body-fixed frame, in reference radii of the model',
      body: fieldBody,
      answer: anyObject,
      handler: ({ body }) => shop.pool.run({ kind: 'evaluateField', ...body }),
    }),
    defineRoute({
      method: 'get',
      path: '/api/problems',
      tag: 'service',
      summary: 'All problems the service knows',
      answer: page,
      handler: () => whole((Object.keys(ERROR_CODES) as ErrorCode[]).map(described)),
    }),
    defineRoute({
      method: 'get',
      path: '/api/problems/{code}',
      tag: 'service',
      summary: 'What a problem means',
      answer: z.object({ code: z.string(), type: z.string(), status: z.number(), title: z.string(), help: z.string() }),
      handler: ({ params }) => {
        const code = params.code.toUpperCase().replaceAll('-', '_');
        return found(
          Object.hasOwn(ERROR_CODES, code) ? described(code as ErrorCode) : undefined,
          'problem',
          params.code,
        );
      },
    }),
  ];
}

function described(code: ErrorCode) {
  const { status, title, help } = ERROR_CODES[code];
  return { code, type: problemType(code), status, title, help };
}
