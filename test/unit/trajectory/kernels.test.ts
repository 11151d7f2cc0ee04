import { describe, expect, it } from 'vitest';
import { bytesOf, SpkKernel } from '../../../server/ephemeris/index.ts';
import { unequalStates, writeSpk } from '../../make/spkWriter.ts';
import { codes, conicState, PERIAPSIS_TDB_S, read } from './invented.ts';

type Motion = (epochTdbS: number) => number[];
const FROM = PERIAPSIS_TDB_S - 40_000;
const TO = PERIAPSIS_TDB_S + 40_000;

const flyby: Motion = (t) => conicState('uranus', 1.5, 1.4, t);
const straight =
  (x: number, vx: number): Motion =>
  (t) => [x + vx * (t - PERIAPSIS_TDB_S), 0, 0, vx, 0, 0];
const sum =
  (a: Motion, b: Motion): Motion =>
  (t) =>
    a(t).map((value, i) => value + b(t)[i]);

function segment(target: number, center: number, motion: Motion, from = FROM, to = TO, extra: object = {}) {
  const epochs: number[] = [];
  for (let t = from; t < to; t += 100) epochs.push(t);
  epochs.push(to);
  return { target, center, type: 13, startTdbS: from, stopTdbS: to, words: unequalStates(motion, epochs, 3), ...extra };
}

/** The planet's centre moves about the barycentre; both drift about the Sun. */
const center = straight(30, 1e-3);
const barycenter = straight(2.9e9, 6);

function expectFlyby(reading: ReturnType<typeof read>, toleranceKm = 1e-5): void {
  const out = new Float64Array(6);
  for (const t of [-39_000, -500, 0.5, 12_345]) {
    reading.path.stateInto(PERIAPSIS_TDB_S + t, out);
    const expected = flyby(PERIAPSIS_TDB_S + t);
    for (let i = 0; i < 3; i++) expect(Math.abs(out[i] - expected[i])).toBeLessThan(toleranceKm);
  }
}

describe('kernels', () => {
  it('takes the spacecraft from the barycentre to the planet that the kernel carries', () => {
    const reading = read(
      writeSpk({
        comments: 'Invented\nfor a test',
        segments: [segment(-9, 7, sum(flyby, center)), segment(799, 7, center)],
      }),
    );
    expectFlyby(reading);
    expect(codes(reading)).toEqual(['leapSecondsHeld']);
    expect(reading.summary).toMatchObject({
      planet: 'uranus',
      objectId: '-9',
      timeSystem: 'TDB',
      comments: ['Invented', 'for a test'],
    });
    expect(reading.summary.center).toMatch(/URANUS BARYCENTER and taken to URANUS/);
  });

  it('chains a Sun-centred spacecraft through the barycentre', () => {
    const reading = read(
      writeSpk({
        littleEndian: false,
        segments: [
          segment(-9, 10, sum(sum(flyby, center), barycenter)),
          segment(799, 7, center),
          segment(7, 10, barycenter),
        ],
      }),
    );
    // Coordinates of 3e9 km have a spacing of 5e-7 km, and five of them are added.
    expectFlyby(reading, 1e-5);
    expect(reading.summary.closestApproaches[0].epochTdbS).toBeCloseTo(PERIAPSIS_TDB_S, 3);
  });

  it('says when it can only reach the barycentre', () => {
    const reading = read(writeSpk({ segments: [segment(-9, 7, flyby)] }));
    expect(codes(reading)).toContain('barycenter');
    expect(reading.summary.comments).toEqual([]);
    expectFlyby(reading);
  });

  it('lets the later segment of the file win where two overlap', () => {
    const shifted: Motion = sum(flyby, straight(1000, 0));
    const early = segment(-9, 799, shifted);
    const late = segment(-9, 799, flyby, FROM + 10_000, TO - 10_000);
    const { path } = read(writeSpk({ segments: [early, late] }));
    const { path: reversed } = read(writeSpk({ segments: [late, early] }));
    const out = new Float64Array(6);
    expect(path.stateInto(PERIAPSIS_TDB_S, out)[0]).toBeCloseTo(flyby(PERIAPSIS_TDB_S)[0], 5);
    expect(path.spans).toHaveLength(3);
    expect(reversed.stateInto(PERIAPSIS_TDB_S, out)[0]).toBeCloseTo(flyby(PERIAPSIS_TDB_S)[0] + 1000, 5);
  });

  it('trusts the interval of the summary where it is narrower than the states', () => {
    const narrow = { ...segment(-9, 799, flyby), startTdbS: FROM + 5000, stopTdbS: TO - 5000 };
    const { path } = read(writeSpk({ segments: [narrow] }));
    expect(path.spans).toMatchObject([{ startTdbS: FROM + 5000, stopTdbS: TO - 5000 }]);
  });

  it('turns ecliptic states to ICRF axes', () => {
    const epsilon = ((84_381.448 / 3600) * Math.PI) / 180;
    const turned: Motion = (t) => {
      const [x, y, z, vx, vy, vz] = flyby(t);
      const back = (a: number, b: number): number[] => [
        a * Math.cos(epsilon) + b * Math.sin(epsilon),
        b * Math.cos(epsilon) - a * Math.sin(epsilon),
      ];
      return [x, ...back(y, z), vx, ...back(vy, vz)];
    };
    const reading = read(writeSpk({ segments: [segment(-9, 799, turned, FROM, TO, { frame: 17 })] }));
    expectFlyby(reading);
    expect(reading.summary.frame).toBe('ECLIPJ2000');
  });

  it('chooses the spacecraft by code and lists the choices', () => {
    const kernel = writeSpk({ segments: [segment(-9, 799, flyby), segment(-10, 799, sum(flyby, straight(5000, 0)))] });
    expect(() => read(kernel)).toThrow(/-9, -10/);
    expect(read(kernel, { targetId: -10 }).summary.objectId).toBe('-10');
    expect(read(kernel, { targetId: -10 }).path.inputsSha256).not.toBe(
      read(kernel, { targetId: -9 }).path.inputsSha256,
    );
    expect(() => read(kernel, { targetId: -11 })).toThrow(expect.objectContaining({ code: 'TARGET_NEEDED' }));
  });

  it('names a pass of another giant planet on the way', () => {
    const jupiter: Motion = (t) => sum(straight(-400_000, 0), flyby)(t);
    const kernel = writeSpk({ segments: [segment(-9, 799, flyby), segment(5, 799, jupiter)] });
    expect(codes(read(kernel))).toContain('otherGiantPlanet');
  });

  it('asks for the planet when the kernel links both', () => {
    const far = straight(-1.5e9, 0);
    const kernel = writeSpk({
      segments: [
        segment(-9, 0, sum(flyby, barycenter)),
        segment(7, 0, barycenter),
        segment(8, 0, sum(barycenter, far)),
      ],
    });
    expect(() => read(kernel)).toThrow(expect.objectContaining({ code: 'PLANET_NEEDED' }));
    expect(read(kernel, { planet: 'uranus' }).summary.planet).toBe('uranus');
    expect(codes(read(kernel, { planet: 'neptune' }))).toEqual(
      expect.arrayContaining(['outsideBelts', 'otherGiantPlanet']),
    );
  });

  it('reads kernels of more segments than one record holds', () => {
    const pieces = Array.from({ length: 60 }, (_, i) =>
      segment(-9, 799, flyby, FROM + 1000 * i, FROM + 1000 * (i + 1)),
    );
    const kernel = new SpkKernel(bytesOf(writeSpk({ segments: pieces, comments: 'x'.repeat(2500) })));
    expect(kernel.segments).toHaveLength(60);
    expect(kernel.comments.join('')).toHaveLength(2500);
  });

  it('does not follow a circle of centres', () => {
    const kernel = writeSpk({ segments: [segment(-9, 3, flyby), segment(3, -9, flyby)] });
    expect(() => read(kernel)).toThrow(expect.objectContaining({ code: 'CENTER_REFUSED' }));
  });
});
