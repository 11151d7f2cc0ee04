import { describe, it } from 'vitest';
import { checkCase, isHeavy, NAMED } from './singleScattering.ts';

/** Source: single scattering, see singleScattering.ts. */
const HISTORIES = { light: 150_000, heavy: 150_000 };

describe('electron beams against single scattering, all cases', () => {
  it.each(NAMED)('%s', (_, golden) => {
    checkCase(golden, isHeavy(golden) ? HISTORIES.heavy : HISTORIES.light, 5, [0.5, 0.2, 0.1]);
  });
});
