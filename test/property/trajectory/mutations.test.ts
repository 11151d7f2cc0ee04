import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { randomStream } from '../../../server/numeric/random.ts';
import { attempt, mutated, seedFiles } from './mutations.ts';

/** The limit for one file, ms. */
const HANG_MS = 2000;
const CASES = 1500;
const seeds = seedFiles();

describe('damaged files', () => {
  it('starts from files that all read', () => {
    for (const [i, seed] of seeds.entries()) {
      const { code } = attempt(seed, {});
      // Only the table does not say which planet it is about.
      expect(code === 'PLANET_NEEDED' ? attempt(seed, { planet: 'uranus' }).code : code, `seed ${i}`).toBe('');
    }
  });

  it(`gives an answer or a refusal for ${CASES} mutations, never another error or a hang`, () => {
    const outcomes = new Map<string, number>();
    for (let i = 0; i < CASES; i++) {
      const random = randomStream(20_260, 0, i);
      const { code, milliseconds } = attempt(mutated(seeds[i % seeds.length], random), {});
      expect(milliseconds, `case ${i}`).toBeLessThan(HANG_MS);
      outcomes.set(code, (outcomes.get(code) ?? 0) + 1);
    }
    // Both kinds of outcome occur, and refusals of many kinds, or the mutations would test nothing.
    expect(outcomes.get('')).toBeGreaterThan(CASES / 50);
    expect(outcomes.size).toBeGreaterThan(6);
  });

  it('gives an answer or a refusal for arbitrary bytes and texts', () => {
    const start = fc.constantFrom(
      '',
      'CCSDS_OEM_VERS = 2.0\n',
      '<oem>',
      'DAF/SPK ',
      'epoch_tdb_s,x_km,y_km,z_km,vx_km_s,vy_km_s,vz_km_s\n',
    );
    fc.assert(
      fc.property(start, fc.uint8Array({ maxLength: 3000 }), fc.string({ maxLength: 300 }), (head, bytes, text) => {
        const encoder = new TextEncoder();
        for (const tail of [bytes, encoder.encode(text)]) {
          const whole = new Uint8Array([...encoder.encode(head), ...tail]);
          expect(attempt(whole, { planet: 'uranus' }).milliseconds).toBeLessThan(HANG_MS);
        }
      }),
      { numRuns: 300, seed: 7 },
    );
  });
});
