import { z } from 'zod';
import { compareAssessments } from '../margin/index.ts';
import { resultOf } from './assessments.ts';
import { defineRoute, type Route } from './routes.ts';
import { anyObject } from './schemas.ts';
import { found, type Shop } from './shop.ts';

const comparisonQuery = z.object({ with: z.string().min(1).max(64) });

/** Two assessments beside each other: what changed in the inputs, and how far each dose and margin moved. */
export function comparisonRoutes(shop: Shop): Route[] {
  return [
    defineRoute({
      method: 'get',
      path: '/api/assessments/{id}/compare',
      tag: 'assessments',
      summary:
        'What changed in an assessment against an earlier one (with), and by how much each dose and margin moved',
      query: comparisonQuery,
      answer: anyObject,
      handler: async ({ params, query }) => {
        const after = found(shop.assessments.get(params.id), 'assessment', params.id);
        const before = found(shop.assessments.get(query.with), 'assessment', query.with);
        const comparison = compareAssessments(await resultOf(shop, before.id), await resultOf(shop, after.id));
        return {
          before: { id: before.id, name: before.name },
          after: { id: after.id, name: after.name },
          ...comparison,
        };
      },
    }),
  ];
}
