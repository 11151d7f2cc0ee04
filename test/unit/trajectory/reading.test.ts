import { describe, expect, it } from 'vitest';
import { codes, conicState, flyby, PERIAPSIS_TDB_S, read } from './invented.ts';

const DAY = { fromS: -86_400, toS: 86_400, stepS: 120 };

describe('the reading of a clean flyby', () => {
  const reading = read(flyby([DAY]), { name: 'Candidate A' });

  it('finds the closest approach of the analytic path', () => {
    const [approach] = reading.summary.closestApproaches;
    expect(reading.summary.closestApproaches).toHaveLength(1);
    expect(approach.epochTdbS).toBeCloseTo(PERIAPSIS_TDB_S, 3);
    expect(approach.radiusPlanetRadii).toBeCloseTo(1.5, 7);
    expect(approach.altitudeKm).toBeGreaterThan(0.5 * 25_559);
    expect(approach.altitudeKm).toBeLessThan(1.5 * 25_559 - 24_973 + 1);
  });

  it('says only that leap seconds are held, and everything else in sentences', () => {
    expect(codes(reading)).toEqual(['leapSecondsHeld']);
    expect(reading.summary.name).toBe('Candidate A');
    expect(reading.summary.reading.join(' ')).toMatch(
      /INVENTED PROBE.*one segment.*1\u202f441 states.*relative to URANUS.*Hermite of degree 7.*Closest approach.*flyby/s,
    );
    expect(reading.summary.interpolationErrorKm).toBeLessThan(0.01);
  });

  it('is the same every time', () => {
    const again = read(flyby([DAY]), { name: 'Candidate A' });
    expect(again.summary).toEqual(reading.summary);
    expect(again.path.inputsSha256).toBe(reading.path.inputsSha256);
    expect(read(flyby([{ ...DAY, stepS: 240 }])).path.inputsSha256).not.toBe(reading.path.inputsSha256);
  });

  it('evaluates inside its spans only', () => {
    const out = new Float64Array(6);
    const expected = conicState('uranus', 1.5, 1.4, PERIAPSIS_TDB_S + 777);
    reading.path.stateInto(PERIAPSIS_TDB_S + 777, out);
    // Nodes are printed to 1e-6 km and 1e-9 km/s.
    for (let i = 0; i < 3; i++) expect(Math.abs(out[i] - expected[i])).toBeLessThan(2e-6);
    for (const epoch of [PERIAPSIS_TDB_S + 86_401, PERIAPSIS_TDB_S - 86_401, Number.NaN, 1e300]) {
      expect(() => reading.path.stateInto(epoch, out)).toThrow(
        expect.objectContaining({ code: 'TRAJECTORY_OUTSIDE_SPAN' }),
      );
    }
  });
});

describe('notices', () => {
  it('names metres taken for kilometres', () => {
    const reading = read(flyby([{ ...DAY, stepS: 600 }], { scale: 1000 }));
    expect(codes(reading)).toContain('metresForKilometres');
  });

  it('names a path inside the planet', () => {
    expect(codes(read(flyby([DAY], { periapsisRadii: 0.9 })))).toContain('insidePlanet');
    expect(codes(read(flyby([DAY], { periapsisRadii: 1.001 })))).not.toContain('insidePlanet');
  });

  it('names a path that stays outside the belts', () => {
    const reading = read(flyby([{ fromS: -86_400, toS: 86_400, stepS: 3600 }], { periapsisRadii: 40 }));
    expect(codes(reading)).toContain('outsideBelts');
    expect(codes(reading)).not.toContain('nodeSpacingCoarse');
  });

  it('names coarse nodes with their leave-one-out error', () => {
    const reading = read(flyby([{ ...DAY, stepS: 900 }]));
    const notice = reading.summary.notices.find(({ code }) => code === 'nodeSpacingCoarse');
    expect(notice?.text).toMatch(/15\.0 min apart at 1\.\d+ planet radii.*moves the path by at most/);
    expect(reading.summary.interpolationErrorKm).toBeGreaterThan(1);
    expect(reading.summary.nodeSpacingS?.[0]).toBeCloseTo(900, 6);
  });

  it('names velocities that do not belong to the positions', () => {
    const text = flyby([DAY]).replace(
      /^(20\S+ \S+ \S+ \S+) (.*)$/gm,
      (_, head: string, tail: string) =>
        `${head} ${tail
          .split(' ')
          .map((v) => (Number(v) * 1.2).toFixed(9))
          .join(' ')}`,
    );
    expect(codes(read(text))).toContain('velocityInconsistent');
  });

  it('names the barycentre and its distance', () => {
    const reading = read(flyby([DAY], { center: 'Uranus_Barycenter' }));
    const notice = reading.summary.notices.find(({ code }) => code === 'barycenter');
    expect(notice?.text).toMatch(/at most 44 km/);
    expect(reading.summary.center).toBe('Uranus_Barycenter');
  });

  it('names a gap and lists it', () => {
    const reading = read(
      flyby([
        { ...DAY, toS: -3600 },
        { ...DAY, fromS: 3600 },
      ]),
    );
    expect(codes(reading)).toEqual(expect.arrayContaining(['gap', 'noClosestApproach']));
    expect(reading.summary.gaps).toHaveLength(1);
    expect(reading.summary.gaps[0].durationS).toBeCloseTo(7200, 6);
    expect(reading.summary.spans).toHaveLength(2);
  });

  it('spells out twenty gaps and counts the rest', () => {
    const blocks = Array.from({ length: 60 }, (_, i) => ({
      fromS: 1000 * i - 30_000,
      toS: 1000 * i - 29_300,
      stepS: 100,
    }));
    const reading = read(flyby(blocks));
    const gaps = reading.summary.notices.filter(({ code }) => code === 'gap');
    expect(reading.summary.gaps).toHaveLength(59);
    expect(gaps).toHaveLength(21);
    expect(gaps[20].text).toMatch(/39 further notices of the kind "gap"/);
  });

  it('counts overlapping spans once', () => {
    const reading = read(
      flyby([
        { ...DAY, toS: 6000 },
        { ...DAY, fromS: -7200 },
      ]),
    );
    expect(codes(reading)).toContain('overlap');
    const [first, second] = reading.path.spans;
    expect(second.startTdbS).toBe(first.stopTdbS);
    expect(first.stopTdbS).toBeCloseTo(PERIAPSIS_TDB_S + 6000, 6);
    expect(reading.summary.closestApproaches).toHaveLength(1);
  });

  it('drops a segment that another one covers', () => {
    const reading = read(flyby([DAY, { fromS: -3600, toS: 3600, stepS: 60 }]));
    expect(codes(reading)).toContain('overlap');
    expect(reading.path.spans).toHaveLength(1);
  });

  it('finds a closest approach at the joint of two segments once', () => {
    const reading = read(
      flyby([
        { ...DAY, toS: 0 },
        { ...DAY, fromS: 0 },
      ]),
    );
    expect(reading.summary.closestApproaches).toHaveLength(1);
    expect(reading.summary.closestApproaches[0].epochTdbS).toBeCloseTo(PERIAPSIS_TDB_S, 3);
    expect(reading.summary.gaps).toEqual([]);
  });

  it('says when the path is cut before its closest approach', () => {
    const reading = read(flyby([{ ...DAY, toS: -3600 }]));
    expect(codes(reading)).toContain('noClosestApproach');
    expect(reading.summary.closestApproaches).toEqual([]);
  });

  it('leaves out segments about another body and names a close pass of a giant planet', () => {
    const two = flyby([{ fromS: -186_400, toS: -100_000, stepS: 600 }, DAY]).replace(
      'CENTER_NAME = URANUS',
      'CENTER_NAME = JUPITER',
    );
    const reading = read(two);
    expect(codes(reading)).toContain('segmentLeftOut');
    expect(reading.path.spans).toHaveLength(1);
    // 35 Uranus radii are 12.6 of Jupiter.
    expect(codes(reading)).toContain('otherGiantPlanet');
  });

  it('says when degree had to fall', () => {
    const reading = read(flyby([{ fromS: -120, toS: 120, stepS: 120 }]));
    expect(codes(reading)).toContain('degreeLowered');
    expect(reading.summary.segments[0].degree).toBe(5);
  });
});

describe('the planet of the request', () => {
  it('must agree with the file', () => {
    expect(() => read(flyby([DAY]), { planet: 'neptune' })).toThrow(expect.objectContaining({ code: 'PLANET_NEEDED' }));
    expect(read(flyby([DAY]), { planet: 'uranus' }).summary.planet).toBe('uranus');
  });

  it('is the centre of a table, which says so', () => {
    const rows = Array.from({ length: 200 }, (_, i) => {
      const epoch = PERIAPSIS_TDB_S + 120 * (i - 100);
      return [epoch, ...conicState('uranus', 1.5, 1.4, epoch)].join(',');
    });
    const table = `epoch_tdb_s,x_km,y_km,z_km,vx_km_s,vy_km_s,vz_km_s\n${rows.join('\n')}\n`;
    const reading = read(table, { planet: 'uranus' });
    expect(codes(reading)).toEqual(expect.arrayContaining(['centerAssumed', 'frameAssumed', 'interpolationAssumed']));
    expect(reading.summary.closestApproaches[0].radiusPlanetRadii).toBeCloseTo(1.5, 9);
    expect(() => read(table)).toThrow(expect.objectContaining({ code: 'PLANET_NEEDED' }));
  });
});
