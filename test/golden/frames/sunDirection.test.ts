import * as astronomy from 'astronomy-engine';
import { expect, it } from 'vitest';
import { sunDirectionIcrf } from '../../../server/frames/sunDirection.ts';
import { parseEpoch } from '../../../server/time/index.ts';

it.each([
  ['uranus', '1986-01-24T18:00:00'],
  ['uranus', '2045-06-01T00:00:00'],
  ['neptune', '1989-08-25T04:00:00'],
  ['neptune', '2049-03-01T00:00:00'],
] as const)('the Sun stands where an ephemeris has it: %s at %s', (planet, utc) => {
  // Source: astronomy-engine (VSOP87), heliocentric vector in the mean equator of J2000; pictures need 0.2°.
  const body = planet === 'uranus' ? astronomy.Body.Uranus : astronomy.Body.Neptune;
  const { x, y, z } = astronomy.HelioVector(body, new Date(`${utc}Z`));
  const [a, b, c] = sunDirectionIcrf(planet, parseEpoch(utc, 'UTC'));
  const cosine = -(a * x + b * y + c * z) / Math.hypot(x, y, z);
  expect((Math.acos(Math.min(1, cosine)) * 180) / Math.PI).toBeLessThan(0.2);
});
