import { describe, expect, it } from 'vitest';
import { z } from 'zod';
import { assessmentResultSchema, schemaRoutes } from '../../../server/api/resultSchema.ts';
import { smallResult } from '../report/fixture.ts';

const result = JSON.parse(JSON.stringify(smallResult()));

describe('schema of a result', () => {
  it('describes a result whole: what it does not know would be stripped', () => {
    expect(assessmentResultSchema.parse(result)).toEqual(result);
  });

  it('is published as JSON Schema that takes the result and refuses a dose in words', () => {
    const [route] = schemaRoutes();
    const published = (route.handler as () => Record<string, unknown>)();
    expect(published.$schema).toBe('https://json-schema.org/draft/2020-12/schema');
    const read = z.fromJSONSchema(published as Parameters<typeof z.fromJSONSchema>[0]);
    expect(read.safeParse(result).error?.issues ?? []).toEqual([]);
    const [row, ...rows] = result.shieldDose;
    const worded = { ...result, shieldDose: [{ ...row, doseKradSi: { ...row.doseKradSi, total: 'much' } }, ...rows] };
    expect(read.safeParse(worded).error?.issues[0].path).toEqual(['shieldDose', 0, 'doseKradSi']);
  });
});
