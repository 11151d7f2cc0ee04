import { z } from 'zod';
import { kingEventExample } from '../dose/index.ts';
import { defineRoute, type Route } from './routes.ts';
import { otherSourceSchema } from './schemas.ts';

const exampleQuery = z.object({
  scale: z.coerce.number().positive().max(1000).default(1),
  phase: z.string().trim().min(1).max(200).default('cruise'),
});

/** Sources other than the belts are part of an assessment request; here only the example that ships. */
export function otherSourceRoutes(): Route[] {
  return [
    defineRoute({
      method: 'get',
      path: '/api/other-sources/king-1974',
      tag: 'assessments',
      summary: 'An example for otherSources: solar protons of the form of King (1974) at 1 AU; no cruise environment',
      query: exampleQuery,
      answer: otherSourceSchema,
      handler: ({ query }) => kingEventExample(query.scale, query.phase),
    }),
  ];
}
