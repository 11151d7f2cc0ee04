/**
 * Source: the general-purpose npm library astronomy-engine (IAU poles and rotation); PDS definitions of ULS and NLS
 * longitude; Lamy et al. (2025) for the period error.
 */
import * as Astronomy from 'astronomy-engine';
import { describe, expect, it } from 'vitest';
import { phaseSigmaDeg, ROTATION_MODELS, spinPoleIcrf } from '../../../server/frames/rotation.ts';
import { parseEpoch } from '../../../server/time/index.ts';

/** One arc second, in radian. */
const ARCSECOND = Math.PI / 180 / 3600;

describe('rotation', () => {
  it('puts the poles where astronomy-engine has them, Uranus reversed to its spin', () => {
    const date = new Date('2030-03-01T00:00:00Z');
    const epoch = parseEpoch('2030-03-01T00:00:00', 'UTC');
    for (const [model, body, sign] of [
      [ROTATION_MODELS['uranus-2025'], Astronomy.Body.Uranus, -1],
      [ROTATION_MODELS['neptune-2009'], Astronomy.Body.Neptune, 1],
    ] as const) {
      const { north } = Astronomy.RotationAxis(body, Astronomy.MakeTime(date));
      const ours = spinPoleIcrf(model, epoch);
      const cosine = sign * (north.x * ours[0] + north.y * ours[1] + north.z * ours[2]);
      expect(Math.acos(Math.min(1, cosine))).toBeLessThan(20 * ARCSECOND);
    }
  });

  it('turns Uranus once in its published period and loses 6 degrees by 2045', () => {
    const model = ROTATION_MODELS['uranus-2025'];
    expect(Math.abs((360 / model.rateDegPerDay) * 24 - 17.247864)).toBeLessThan(1e-6);
    expect(phaseSigmaDeg(model, parseEpoch('2045-01-01T00:00:00', 'UTC'))).toBeCloseTo(6.3, 1);
    expect(phaseSigmaDeg(ROTATION_MODELS['neptune-2009'], parseEpoch('1990-08-25T04:00:00', 'UTC'))).toBeGreaterThan(
      70,
    );
  });
});
