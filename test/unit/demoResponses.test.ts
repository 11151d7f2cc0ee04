import { readFileSync } from 'node:fs';
import { expect, it } from 'vitest';
import { shippedResponses } from '../../server/demo.ts';
import { STANDARD_RESPONSE } from '../../server/jobs/assessment.ts';
import { responseKey } from '../../server/shielding/response.ts';
import type { StackInput } from '../../server/shielding/types.ts';

it('the shipped responses fit the engine: one under the key of every shield of the demo study', () => {
  const demo = JSON.parse(readFileSync(new URL('../../fixtures/demo/study.json', import.meta.url), 'utf8')) as {
    stacks: (StackInput & { key: string; name: string })[];
  };
  const keys = demo.stacks.map(({ key: _key, name: _name, ...stack }) => responseKey(stack, STANDARD_RESPONSE));
  const shipped = shippedResponses();
  expect(Object.keys(shipped).sort()).toEqual([...keys].sort());
  for (const response of Object.values(shipped)) expect(response.electron.doseGyCm2).toHaveLength(90);
});
