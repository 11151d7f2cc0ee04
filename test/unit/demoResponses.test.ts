import { expect, it } from 'vitest';
import { shippedResponses } from '../../server/demo.ts';
import { demoStacks } from '../make/demoStacks.ts';

it('the shipped responses fit the engine: one under the key of every stack that the demo study needs', () => {
  const shipped = shippedResponses();
  expect(Object.keys(shipped).sort()).toEqual([...demoStacks().keys()].sort());
  for (const response of Object.values(shipped)) expect(response.electron.doseGyCm2).toHaveLength(90);
});
