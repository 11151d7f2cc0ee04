import { expect, it } from 'vitest';
import { randomStream } from '../../../server/numeric/random.ts';
import { attempt, mutated, seedFiles } from './mutations.ts';

/** The limits for one file. */
const HANG_MS = 2000;
const MEMORY_MB = 300;
const CASES = 20_000;

it(`survives ${CASES} damaged files without another error, a hang or a heap that grows`, () => {
  const seeds = seedFiles();
  const baseMb = process.memoryUsage().rss / 2 ** 20;
  for (let i = 0; i < CASES; i++) {
    const { milliseconds } = attempt(mutated(seeds[i % seeds.length], randomStream(4, 1, i)), {});
    expect(milliseconds, `case ${i}`).toBeLessThan(HANG_MS);
    expect(process.memoryUsage().rss / 2 ** 20 - baseMb, `case ${i}`).toBeLessThan(MEMORY_MB);
  }
});
