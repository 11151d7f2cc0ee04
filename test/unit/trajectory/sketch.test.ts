import { describe, expect, it } from 'vitest';
import { PLANETS } from '../../../server/constants/planets.ts';
import { defaultRotationModel, spinPoleIcrf } from '../../../server/frames/rotation.ts';
import { utcToTdbS } from '../../../server/time/index.ts';
import {
  type ElementFlybySketch,
  type OrbitSketch,
  sampledOem,
  sketchFlyby,
  sketchOrbit,
} from '../../../server/trajectory/index.ts';
import { codes, flyby, PERIAPSIS_TDB_S, read } from './invented.ts';

const FLYBY: ElementFlybySketch = {
  planet: 'uranus',
  name: 'Invented flyby',
  periapsisUtc: '2045-03-01T00:00:00Z',
  periapsisPlanetRadii: 1.3,
  vInfKmS: 8,
  inclinationDeg: 30,
  nodeDeg: 20,
  argumentDeg: 45,
};
const ORBIT: OrbitSketch = {
  planet: 'neptune',
  name: 'Invented orbiter',
  periapsisUtc: '2048-03-01T00:00:00',
  periapsisPlanetRadii: 1.4,
  periodDays: 12,
  passes: 4,
  inclinationDeg: 120,
  nodeDeg: 300,
  argumentDeg: 250,
};
const cross = (a: readonly number[], b: readonly number[]): number[] => [
  a[1] * b[2] - a[2] * b[1],
  a[2] * b[0] - a[0] * b[2],
  a[0] * b[1] - a[1] * b[0],
];
const unit = (a: readonly number[]): number[] => a.map((value) => value / Math.hypot(...a));

describe('sketches', () => {
  it('read like any other trajectory, and say that they are sketches', () => {
    const reading = read(sketchFlyby(FLYBY).oem);
    expect(codes(reading)).toEqual(['sketched', 'leapSecondsHeld']);
    expect(reading.summary.closestApproaches[0].utc).toBe('2045-03-01T00:00:00.000Z');
    expect(reading.summary.comments.join(' ')).toMatch(/hyperbola about the planet alone/);
    expect(reading.summary.interpolationErrorKm).toBeLessThan(0.1);
  });

  it('have the inclination to the equator that was asked for', () => {
    for (const inclinationDeg of [0, 30, 90, 150, 180]) {
      const { path } = read(sketchFlyby({ ...FLYBY, inclinationDeg }).oem);
      const state = path.stateInto(utcToTdbS(FLYBY.periapsisUtc), new Float64Array(6));
      const normal = unit(cross([...state.subarray(0, 3)], [...state.subarray(3)]));
      const pole = spinPoleIcrf(defaultRotationModel('uranus'), 0);
      const cosine = normal[0] * pole[0] + normal[1] * pole[1] + normal[2] * pole[2];
      // The path is printed to 1e-9 km/s, which leaves 1e-10 of the direction.
      expect(cosine).toBeCloseTo(Math.cos((inclinationDeg * Math.PI) / 180), 8);
    }
  });

  it('make the same bytes every time, and other bytes from other numbers', () => {
    expect(sketchOrbit(ORBIT).oem).toBe(sketchOrbit(ORBIT).oem);
    expect(sketchOrbit({ ...ORBIT, nodeDeg: 301 }).oem).not.toBe(sketchOrbit(ORBIT).oem);
  });

  it('pass as often as asked, at the period asked', () => {
    const { summary } = read(sketchOrbit(ORBIT).oem);
    const times = summary.closestApproaches.map(({ epochTdbS }) => epochTdbS);
    expect(times).toHaveLength(4);
    for (let i = 1; i < 4; i++) expect(times[i] - times[i - 1]).toBeCloseTo(12 * 86_400, 2);
    expect(summary.periodS).toBeGreaterThan(11.9 * 86_400);
  });

  it('come in along v∞ through the point of the B-plane', () => {
    const vInf = [5, -8, 3] as const;
    const [bDotTKm, bDotRKm] = [80_000, -30_000];
    const sketch = sketchFlyby({
      planet: 'neptune',
      name: 'Invented arrival',
      periapsisUtc: '2047-03-01T00:00:00',
      vInfIcrfKmS: vInf,
      bDotTKm,
      bDotRKm,
      limitPlanetRadii: 2000,
    });
    const { path, summary } = read(sketch.oem);
    const state = [...path.stateInto(path.spans[0].startTdbS, new Float64Array(6))];
    const s = unit(vInf);
    const t = unit(cross(s, [...spinPoleIcrf(defaultRotationModel('neptune'), utcToTdbS('2047-03-01T00:00:00'))]));
    const r = cross(s, t);
    const b = [0, 1, 2].map((i) => bDotTKm * t[i] + bDotRKm * r[i]);
    // Source: the angular momentum of the asymptote, h = B × v∞, is that of every point of the path.
    const expected = cross(b, vInf);
    const momentum = cross(state.slice(0, 3), state.slice(3));
    for (let i = 0; i < 3; i++)
      expect(Math.abs(momentum[i] - expected[i])).toBeLessThan(1e-6 * Math.hypot(...expected));
    expect(summary.vInfKmS).toBeCloseTo(Math.hypot(...vInf), 6);
    // At 2000 radii the direction still turns by about GM b / (v∞² r²) = 2.5e-6.
    const along = unit(state.slice(3));
    expect(Math.hypot(...along.map((value, i) => value - s[i]))).toBeLessThan(1e-3);
    expect(PLANETS.neptune.gmKm3S2 / Math.hypot(...vInf) ** 2).toBeLessThan(1e5);
  });

  it.each([
    [{ periapsisPlanetRadii: 0.9 }, 'periapsisPlanetRadii'],
    [{ vInfKmS: 0 }, 'vInfKmS'],
    [{ vInfKmS: Number.NaN }, 'vInfKmS'],
    [{ inclinationDeg: 190 }, 'inclinationDeg'],
    [{ limitPlanetRadii: 1 }, 'limitPlanetRadii'],
    [{ name: ' ' }, 'name'],
  ])('refuse a flyby with %o', (change, field) => {
    expect(() => sketchFlyby({ ...FLYBY, ...change })).toThrow(
      expect.objectContaining({ code: 'SKETCH_INVALID', places: [expect.objectContaining({ field })] }),
    );
  });

  it.each([
    [{ periodDays: 0.06 }, 'periodDays'],
    [{ apoapsisPlanetRadii: 20 }, 'periodDays'],
    [{ passes: 1.5 }, 'passes'],
    [{ passes: 5000 }, 'passes'],
  ])('refuse an orbit with %o', (change, field) => {
    expect(() => sketchOrbit({ ...ORBIT, ...change })).toThrow(
      expect.objectContaining({ code: 'SKETCH_INVALID', places: [expect.objectContaining({ field })] }),
    );
  });

  it('refuse an arrival that hits the centre', () => {
    const arrival = { planet: 'uranus', name: 'x', periapsisUtc: FLYBY.periapsisUtc, vInfIcrfKmS: [1, 2, 3] } as const;
    expect(() => sketchFlyby({ ...arrival, bDotTKm: 0, bDotRKm: 0 })).toThrow(/hits the centre/);
  });

  it('refuse an epoch that is none', () => {
    expect(() => sketchFlyby({ ...FLYBY, periapsisUtc: '1 March 2045' })).toThrow(
      expect.objectContaining({ code: 'EPOCH_UNREADABLE' }),
    );
  });
});

describe('any path as a message', () => {
  it('follows the path it was sampled from, span by span', () => {
    const { path } = read(
      flyby([
        { fromS: -40_000, toS: -5000, stepS: 100 },
        { fromS: -5000, toS: 40_000, stepS: 50 },
      ]),
    );
    const oem = sampledOem({ path, objectName: 'COPY', originator: 'INVENTED', creationDate: '2026-01-01T00:00:00' });
    const copy = read(oem).path;
    expect(copy.spans).toHaveLength(2);
    const a = new Float64Array(6);
    const b = new Float64Array(6);
    for (let t = -39_000; t < 39_000; t += 777) {
      path.stateInto(PERIAPSIS_TDB_S + t, a);
      copy.stateInto(PERIAPSIS_TDB_S + t, b);
      // Samples are a share of 0.05 of the local dynamical time apart: the error of degree 7 stays below ten metres.
      expect(Math.hypot(a[0] - b[0], a[1] - b[1], a[2] - b[2])).toBeLessThan(0.01);
    }
  });
});
