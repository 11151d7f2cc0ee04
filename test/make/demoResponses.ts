/**
 * Writes db/reference/responses-demo/responses.json: the responses of the demo study's shields and of the same 10 % thinner and
 * thicker, by the same engine and under the same keys as the service computes them, so that the first start shows doses at
 * once. Those that the aluminium tables hold are left out. Run: npx tsx test/make/demoResponses.ts
 */
import { writeFileSync } from 'node:fs';
import { STANDARD_RESPONSE } from '../../server/jobs/shieldResponses.ts';
import { shieldResponse } from '../../server/shielding/response.ts';
import { demoStacks } from './demoStacks.ts';

const entries = [...demoStacks()].map(([key, stack]) => {
  const plain = JSON.stringify(shieldResponse(stack, STANDARD_RESPONSE), (_field, value: unknown) =>
    value instanceof Float64Array ? { float64: Array.from(value) } : value,
  );
  return `${JSON.stringify(key)}: ${plain}`;
});
writeFileSync(
  new URL('../../db/reference/responses-demo/responses.json', import.meta.url),
  `{\n${entries.join(',\n')}\n}\n`,
);
