import { readFileSync } from 'node:fs';
import { aluminiumResponse } from '../../server/dose/aluminium.ts';
import { STANDARD_RESPONSE } from '../../server/jobs/shieldResponses.ts';
import { scaleShield, THICKER_FACTOR, THINNER_FACTOR } from '../../server/margin/index.ts';
import { stacksOf } from '../../server/shielding/composeShield.ts';
import { responseKey } from '../../server/shielding/response.ts';
import type { ShieldInput, StackInput } from '../../server/shielding/types.ts';

/** Every stack that the assessment of the demo study needs a response of and no aluminium table holds, by its key. */
export function demoStacks(): Map<string, StackInput> {
  const demo = JSON.parse(readFileSync(new URL('../../fixtures/demo/study.json', import.meta.url), 'utf8')) as {
    stacks: (StackInput & { key: string; name: string })[];
    options: { places: { stack?: string; shield?: ShieldInput }[] }[];
  };
  const plain = new Map(demo.stacks.map(({ key, name: _name, ...stack }) => [key, stack]));
  const shields = demo.options.flatMap(({ places }) =>
    places.map(
      ({ stack, shield }): ShieldInput => shield ?? { kind: 'stack', stack: plain.get(stack ?? '') as StackInput },
    ),
  );
  const needed = new Map<string, StackInput>();
  for (const shield of shields) {
    for (const factor of [1, THINNER_FACTOR, THICKER_FACTOR]) {
      for (const stack of stacksOf(factor === 1 ? shield : scaleShield(shield, factor))) {
        const key = responseKey(stack, STANDARD_RESPONSE);
        if (aluminiumResponse(key) === null) needed.set(key, stack);
      }
    }
  }
  return needed;
}
