import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { PLANETS, type PlanetId } from '../../../server/constants/planets.ts';
import { bytesOf, propagateInto } from '../../../server/ephemeris/index.ts';
import { type Conic, planeStateInto, timeToRadiusS } from '../../../server/trajectory/conic.ts';
import { readTrajectory, sketchFlyby, sketchOrbit } from '../../../server/trajectory/index.ts';

// Source: fixtures/golden/two-body/README.md (closed forms with GM of gm_de440.tpc).
interface Check {
  readonly planet: string;
  readonly rp_R: number;
  readonly v_peri: number;
  readonly e: number;
}
interface Hyperbolic extends Check {
  readonly v_inf: number;
  readonly turn_deg: number;
  readonly hours_inside_R: Readonly<Record<string, number>>;
}
interface Elliptic extends Check {
  readonly period_d: number;
  readonly a_km: number;
  readonly ra_R: number;
  readonly hours_inside_R_per_orbit: Readonly<Record<string, number>>;
}
const checks: { hyperbolic: Hyperbolic[]; elliptic: Elliptic[] } = JSON.parse(
  readFileSync(new URL('../../../fixtures/golden/two-body/checks.json', import.meta.url), 'utf8'),
);

/** Half of the last printed digit and a rounding of the reference itself. */
const HOURS_TOLERANCE = 0.51e-4;
const ECCENTRICITY_TOLERANCE = 0.51e-6;
const SPEED_TOLERANCE_KM_S = 0.51e-4;
const TURN_TOLERANCE_DEG = 0.51e-3;
/** |dω/dt + dΩ/dt cos i| r at periapsis of the tightest orbit here, km/s. */
const DRIFT_SPEED_KM_S = 1e-4;
const SEMI_MAJOR_TOLERANCE_KM = 0.051;

const idOf = (name: string): PlanetId => name.toLowerCase() as PlanetId;
const common = {
  name: 'Check',
  periapsisUtc: '2045-07-01T12:00:00',
  inclinationDeg: 63,
  nodeDeg: 200,
  argumentDeg: 310,
};

function expectHours(conic: Conic, radiusKm: number, table: Readonly<Record<string, number>>): void {
  for (const [radii, hours] of Object.entries(table)) {
    const time = timeToRadiusS(conic, Number(radii) * radiusKm);
    expect(Math.abs((2 * (Number.isNaN(time) ? 0 : time)) / 3600 - hours), `${radii} radii`).toBeLessThan(
      HOURS_TOLERANCE,
    );
  }
}

describe('sketched flybys', () => {
  it.each(checks.hyperbolic)('$planet, periapsis $rp_R, v∞ $v_inf km/s', (check) => {
    const planet = PLANETS[idOf(check.planet)];
    const { oem, reading } = sketchFlyby({
      ...common,
      planet: planet.id,
      periapsisPlanetRadii: check.rp_R,
      vInfKmS: check.v_inf,
      limitPlanetRadii: 30,
    });
    const { summary } = readTrajectory(bytesOf(new TextEncoder().encode(oem)));
    const [approach] = summary.closestApproaches;
    expect(summary.closestApproaches).toHaveLength(1);
    expect(Math.abs(approach.speedKmS - check.v_peri)).toBeLessThan(SPEED_TOLERANCE_KM_S);
    expect(approach.radiusPlanetRadii).toBeCloseTo(check.rp_R, 8);
    expect(summary.vInfKmS).toBeCloseTo(check.v_inf, 6);
    const periapsisKm = check.rp_R * planet.equatorialRadiusKm;
    const eccentricity = 1 + (periapsisKm * check.v_inf ** 2) / planet.gmKm3S2;
    expect(Math.abs(eccentricity - check.e)).toBeLessThan(ECCENTRICITY_TOLERANCE);
    const turn = Number(/turn ([\d.]+) deg/.exec(reading[0])?.[1]);
    expect(Math.abs(turn - check.turn_deg)).toBeLessThan(TURN_TOLERANCE_DEG);
    expectHours(
      { gmKm3S2: planet.gmKm3S2, periapsisKm, eccentricity },
      planet.equatorialRadiusKm,
      check.hours_inside_R,
    );
  });
});

describe('sketched orbits', () => {
  it.each(checks.elliptic)('$planet, periapsis $rp_R, period $period_d d', (check) => {
    const planet = PLANETS[idOf(check.planet)];
    const { oem, reading } = sketchOrbit({
      ...common,
      planet: planet.id,
      periapsisPlanetRadii: check.rp_R,
      periodDays: check.period_d,
      passes: 2,
    });
    const { summary } = readTrajectory(bytesOf(new TextEncoder().encode(oem)));
    expect(summary.closestApproaches).toHaveLength(2);
    const [first, second] = summary.closestApproaches;
    expect(second.epochTdbS - first.epochTdbS).toBeCloseTo(check.period_d * 86_400, 2);
    // The drift of node and periapsis by J2 turns the ellipse and adds at most a tenth of a metre a second.
    expect(Math.abs(first.speedKmS - check.v_peri)).toBeLessThan(SPEED_TOLERANCE_KM_S + DRIFT_SPEED_KM_S);
    const semiMajorKm = Number(/semi-major axis ([\d.]+) km/.exec(reading[0])?.[1]);
    expect(Math.abs(semiMajorKm - check.a_km)).toBeLessThan(SEMI_MAJOR_TOLERANCE_KM + 0.05);
    const periapsisKm = check.rp_R * planet.equatorialRadiusKm;
    const eccentricity = 1 - periapsisKm / check.a_km;
    expect(Math.abs(eccentricity - check.e)).toBeLessThan(ECCENTRICITY_TOLERANCE);
    const plane = planeStateInto({ gmKm3S2: planet.gmKm3S2, periapsisKm, eccentricity }, 0, new Float64Array(4));
    expect(Math.abs(Math.hypot(plane[2], plane[3]) - check.v_peri)).toBeLessThan(SPEED_TOLERANCE_KM_S);
    expectHours(
      { gmKm3S2: planet.gmKm3S2, periapsisKm, eccentricity },
      planet.equatorialRadiusKm,
      check.hours_inside_R_per_orbit,
    );
  });

  it('takes the apoapsis instead of the period', () => {
    const check = checks.elliptic[0];
    const { reading } = sketchOrbit({
      ...common,
      planet: idOf(check.planet),
      periapsisPlanetRadii: check.rp_R,
      apoapsisPlanetRadii: check.ra_R,
    });
    const days = Number(/period ([\d.]+) d/.exec(reading[0])?.[1]);
    // Half a printed digit of the apoapsis (0.0005 of 48 radii) changes the period by 1.5e-5 of itself.
    expect(Math.abs(days - check.period_d)).toBeLessThan(1.6e-5 * check.period_d + 0.5e-4);
  });
});

describe('universal variables', () => {
  it('agree with Kepler’s equation on ellipses and hyperbolas over many days', () => {
    // Source: two independent closed forms of the same motion (Danby 1988, sections 6.2, 6.6 and 6.9).
    const gmKm3S2 = PLANETS.uranus.gmKm3S2;
    const plane = new Float64Array(4);
    const out = new Float64Array(6);
    for (const eccentricity of [0.1, 0.7, 0.99, 1.0001, 1.4, 5]) {
      const conic: Conic = { gmKm3S2, periapsisKm: 33_000, eccentricity };
      for (const [from, to] of [
        [-20_000, 15_000],
        [500, -90_000],
        [0, 300_000],
      ]) {
        planeStateInto(conic, from, plane);
        const state = Float64Array.of(plane[0], plane[1], 0, plane[2], plane[3], 0);
        expect(propagateInto(gmKm3S2, state, 0, to - from, out)).toBe(true);
        planeStateInto(conic, to, plane);
        // 1e-11 of the distance: some hundred roundings, enlarged by the passage of periapsis.
        const scale = 1e-11 * Math.max(33_000, Math.hypot(plane[0], plane[1]), 20 * Math.abs(to - from));
        expect(Math.hypot(out[0] - plane[0], out[1] - plane[1], out[2])).toBeLessThan(scale);
      }
    }
  });
});
