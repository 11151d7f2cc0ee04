/**
 * Writes db/reference/responses-demo/responses.json: the responses of the demo study's shields, by the same engine and under
 * the same keys as the service computes them, so that the first start shows doses at once. Run:
 * npx tsx test/make/demoResponses.ts
 */
import { readFileSync, writeFileSync } from 'node:fs';
import { STANDARD_RESPONSE } from '../../server/jobs/assessment.ts';
import { responseKey, shieldResponse } from '../../server/shielding/response.ts';
import type { StackInput } from '../../server/shielding/types.ts';

const demo = JSON.parse(readFileSync(new URL('../../fixtures/demo/study.json', import.meta.url), 'utf8')) as {
  stacks: (StackInput & { key: string; name: string })[];
};
const entries = demo.stacks.map(({ key: _key, name: _name, ...stack }) => {
  const response = shieldResponse(stack, STANDARD_RESPONSE);
  const plain = JSON.stringify(response, (_field, value: unknown) =>
    value instanceof Float64Array ? { float64: Array.from(value) } : value,
  );
  return `${JSON.stringify(responseKey(stack, STANDARD_RESPONSE))}: ${plain}`;
});
writeFileSync(
  new URL('../../db/reference/responses-demo/responses.json', import.meta.url),
  `{\n${entries.join(',\n')}\n}\n`,
);
