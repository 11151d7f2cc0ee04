/**
 * Source: Ness et al. (1986), Science 233, 85 (413 nT just before closest approach); Q3 evaluated independently along the
 * encounter (412.65 nT at 17:53:30 UTC, least L 4.642); PDS VG2-N-MAG-4-RDR (37 measured vectors).
 */
import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { bytesOf } from '../../../server/ephemeris/index.ts';
import { fieldModel, makeLabel, tracedLabeller } from '../../../server/field/index.ts';
import { URANUS_Q3_WITH_EXTERNAL } from '../../../server/field/models.ts';
import { bodyAxesInto, ROTATION_MODELS, rotateInto } from '../../../server/frames/rotation.ts';
import { parseEpoch } from '../../../server/time/index.ts';
import { readTrajectory } from '../../../server/trajectory/index.ts';

const GOLDEN = new URL('../../../fixtures/golden/', import.meta.url);

describe('the encounter of 1986', () => {
  const { path } = readTrajectory(bytesOf(readFileSync(new URL('encounters/uranus-1986.oem', GOLDEN))));
  const model = fieldModel('uranus-q3');
  const labeller = tracedLabeller(model);
  const state = new Float64Array(6);
  const axes = new Float64Array(9);
  const body = new Float64Array(3);
  const label = makeLabel();
  const at = (epochTdbS: number, mirrored = false) => {
    path.stateInto(epochTdbS, state);
    bodyAxesInto(ROTATION_MODELS['uranus-1986'], epochTdbS, 0, axes);
    rotateInto(axes, ...([0, 1, 2].map((i) => state[i] / model.referenceRadiusKm) as [number, number, number]), body);
    return labeller.labelInto(body[0], mirrored ? -body[1] : body[1], body[2], label);
  };
  const from = parseEpoch('1986-01-24T16:30:00', 'UTC');
  const to = parseEpoch('1986-01-24T19:30:00', 'UTC');

  it('meets the largest field, when, and the least L', () => {
    let largest = 0;
    let when = 0;
    let leastL = Number.POSITIVE_INFINITY;
    for (let t = from; t <= to; t += 10) {
      const { bNt, lShell } = at(t);
      if (bNt > largest) {
        largest = bNt;
        when = t;
      }
      leastL = Math.min(leastL, lShell);
    }
    expect(Math.abs(largest - 412.65)).toBeLessThan(0.3);
    expect(Math.abs(when - parseEpoch('1986-01-24T17:53:30', 'UTC'))).toBeLessThan(30);
    expect(Math.abs(leastL - 4.642)).toBeLessThan(0.005);
  });

  it('moves the least L to 4.645 with the uniform external field of the same fit', () => {
    const withExternal = tracedLabeller(URANUS_Q3_WITH_EXTERNAL);
    let leastL = Number.POSITIVE_INFINITY;
    for (let t = from; t <= to; t += 10) {
      at(t);
      leastL = Math.min(leastL, withExternal.labelInto(body[0], body[1], body[2], label).lShell);
    }
    expect(Math.abs(leastL - 4.645)).toBeLessThan(0.001);
  });

  it('would show west longitude taken for east', () => {
    let largest = 0;
    for (let t = from; t <= to; t += 30) largest = Math.max(largest, at(t, true).bNt);
    // Published trap value: 482 nT.
    expect(Math.abs(largest - 482)).toBeLessThan(5);
  });
});

describe('measured vectors at Neptune', () => {
  it('O8 keeps magnitude within 2 % and direction within 2 degrees on average, none far off', () => {
    const rows = readFileSync(new URL('neptune-field/vectors.csv', GOLDEN), 'utf8').trim().split('\n').slice(1);
    expect(rows).toHaveLength(37);
    const model = fieldModel('neptune-o8');
    const b = new Float64Array(3);
    for (const row of rows) {
      const [, r, lat, lon, bx, by, bz] = row.split(',').map(Number);
      const latitude = (lat * Math.PI) / 180;
      const longitude = (lon * Math.PI) / 180;
      model.fieldInto(
        r * Math.cos(latitude) * Math.cos(longitude),
        r * Math.cos(latitude) * Math.sin(longitude),
        r * Math.sin(latitude),
        b,
      );
      const measured = Math.hypot(bx, by, bz);
      const modelled = Math.hypot(b[0], b[1], b[2]);
      const angleDeg = (Math.acos((b[0] * bx + b[1] * by + b[2] * bz) / (measured * modelled)) * 180) / Math.PI;
      expect(Math.abs(modelled / measured - 1)).toBeLessThan(0.02);
      expect(angleDeg).toBeLessThan(2);
    }
  });
});
