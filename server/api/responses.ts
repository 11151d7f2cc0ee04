import type { z } from 'zod';
import { AppError } from '../errors.ts';
import { STANDARD_RESPONSE } from '../jobs/shieldResponses.ts';
import { ELECTRON_EDGES_MEV, PROTON_EDGES_MEV } from '../numeric/spectrumGrid.ts';
import { shieldKey } from '../shielding/composeShield.ts';
import type { ResponseOptions } from '../shielding/response.ts';
import { plainStack } from '../shielding/shieldPlan.ts';
import type { ShieldInput, ShieldResponse } from '../shielding/types.ts';
import { defineRoute, type Route } from './routes.ts';
import { accepted, anyObject, responseBody, shieldResponseBody } from './schemas.ts';
import { found, type Shop } from './shop.ts';

/** What a response job is asked for. */
export interface ResponseOrder {
  readonly shield: ShieldInput;
  readonly options: ResponseOptions;
}

/**
 * Responses of stacks and of whole shields: made by a job, then read at once under the hash of what they are of. An
 * assessment makes those that it needs by itself.
 */
export function responseRoutes(shop: Shop): Route[] {
  const optionsOf = (asked: z.infer<typeof responseBody>): ResponseOptions => ({ ...STANDARD_RESPONSE, ...asked });
  const start = (order: ResponseOrder, subjectId: string) => {
    const sha256 = shieldKey(order.shield, order.options);
    const job = shop.runner.add('response', subjectId, order);
    return { id: sha256, jobId: job.id };
  };
  const stackOf = (id: string): ShieldInput => ({
    kind: 'stack',
    stack: found(shop.stacks.get(id), 'stack', id).body,
  });
  return [
    defineRoute({
      method: 'post',
      path: '/api/stacks/{id}/response',
      tag: 'shielding',
      summary:
        'Carry electrons, photons and protons through a stack: its response, of an effort class and target material',
      body: responseBody,
      answer: accepted,
      status: 202,
      handler: ({ params, body, response }) => {
        const made = start({ shield: stackOf(params.id), options: optionsOf(body) }, params.id);
        response.setHeader('Location', `/api/responses/${made.id}`);
        return made;
      },
    }),
    defineRoute({
      method: 'post',
      path: '/api/responses',
      tag: 'shielding',
      summary: 'The same for any shield: a stack, sectors or a box, with a spot shield or without',
      body: shieldResponseBody,
      answer: accepted,
      status: 202,
      handler: ({ body: { shield, ...asked }, response }) => {
        plainStack(shield as ShieldInput, '#/shield');
        const order = { shield: shield as ShieldInput, options: optionsOf(asked) };
        const made = start(order, shieldKey(order.shield, order.options));
        response.setHeader('Location', `/api/responses/${made.id}`);
        return made;
      },
    }),
    defineRoute({
      method: 'get',
      path: '/api/responses/{id}',
      tag: 'shielding',
      summary:
        'A response that has been computed: dose per unit omnidirectional fluence in every energy bin, with its errors',
      answer: anyObject,
      handler: async ({ params }) => {
        const known = await shop.artefacts.get<ShieldResponse>(params.id);
        if (known === null) {
          throw new AppError('NOT_FOUND', `No response "${params.id}" has been computed.`, [
            { field: 'responseId', detail: 'not stored; ask for it with POST', got: params.id },
          ]);
        }
        return responseOnWire(known);
      },
    }),
  ];
}

/** A response with its energy grids, every array under a name that has its unit. */
function responseOnWire({ electron, proton, ...rest }: ShieldResponse): Record<string, unknown> {
  return {
    ...rest,
    electron: { binEdgesMeV: [...ELECTRON_EDGES_MEV], ...plain(electron) },
    proton: { binEdgesMeV: [...PROTON_EDGES_MEV], ...plain(proton) },
  };
}

function plain(arrays: Readonly<Record<string, Float64Array>>): Record<string, number[]> {
  return Object.fromEntries(Object.entries(arrays).map(([name, values]) => [name, Array.from(values)]));
}
