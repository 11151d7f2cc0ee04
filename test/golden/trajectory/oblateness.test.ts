import { expect, it } from 'vitest';
import { PLANETS } from '../../../server/constants/planets.ts';
import { bytesOf } from '../../../server/ephemeris/index.ts';
import { defaultRotationModel } from '../../../server/frames/rotation.ts';
import { equatorAxes } from '../../../server/trajectory/equator.ts';
import { readTrajectory, sketchOrbit } from '../../../server/trajectory/index.ts';

/**
 * Source: numerical integration (Runge & Kutta, fourth order) of Newton's law with the exact acceleration of the J2 term,
 * −∇[(GM J2 R²/2 r³)(3 sin²φ − 1)] (Vallado 2013, eq. 8-30), started on the sketched state at periapsis. The first-order
 * rates leave out terms of order J2² and short-period wobbles, which an average over whole revolutions removes.
 */
const planet = PLANETS.uranus;
const REVOLUTIONS = 20;
/** J2 (R/p)² of this orbit is 7e-4: second-order terms are that share of the drift, osculating elements wobble by it. */
const DRIFT_TOLERANCE_REL = 0.02;

const axes = equatorAxes(defaultRotationModel('uranus'), 0);

function derivativeInto(y: Float64Array, out: Float64Array): void {
  const [px, py, pz] = y;
  const r2 = px * px + py * py + pz * pz;
  const r = Math.sqrt(r2);
  const z = px * axes[6] + py * axes[7] + pz * axes[8];
  const factor = (1.5 * planet.j2 * planet.gmKm3S2 * planet.gravityRadiusKm ** 2) / (r2 * r2 * r);
  const radial = -planet.gmKm3S2 / (r2 * r) + factor * ((5 * z * z) / r2 - 1);
  for (let i = 0; i < 3; i++) {
    out[i] = y[3 + i];
    out[3 + i] = radial * y[i] - 2 * factor * z * axes[6 + i];
  }
}

/** Node and argument of periapsis on the equator, radians. */
function angles(y: Float64Array): { node: number; argument: number } {
  const e = (row: number, at: number): number =>
    axes[3 * row] * y[at] + axes[3 * row + 1] * y[at + 1] + axes[3 * row + 2] * y[at + 2];
  const r = [e(0, 0), e(1, 0), e(2, 0)];
  const v = [e(0, 3), e(1, 3), e(2, 3)];
  const h = [r[1] * v[2] - r[2] * v[1], r[2] * v[0] - r[0] * v[2], r[0] * v[1] - r[1] * v[0]];
  const rMag = Math.hypot(...r);
  const ecc = [
    (v[1] * h[2] - v[2] * h[1]) / planet.gmKm3S2 - r[0] / rMag,
    (v[2] * h[0] - v[0] * h[2]) / planet.gmKm3S2 - r[1] / rMag,
    (v[0] * h[1] - v[1] * h[0]) / planet.gmKm3S2 - r[2] / rMag,
  ];
  const node = Math.atan2(h[0], -h[1]);
  const hMag = Math.hypot(...h);
  const along = ecc[0] * Math.cos(node) + ecc[1] * Math.sin(node);
  const across =
    (ecc[0] * -Math.sin(node) * h[2] + ecc[1] * Math.cos(node) * h[2]) / hMag +
    ecc[2] * Math.sqrt(Math.max(0, 1 - (h[2] / hMag) ** 2));
  return { node, argument: Math.atan2(across, along) };
}

it('drifts node and periapsis as an integration of the J2 term does', () => {
  const { oem, reading } = sketchOrbit({
    planet: 'uranus',
    name: 'Invented orbiter',
    periapsisUtc: '2047-01-01T00:00:00',
    periapsisPlanetRadii: 2,
    periodDays: 1.2,
    passes: 1,
    inclinationDeg: 40,
    nodeDeg: 30,
    argumentDeg: 70,
  });
  const { path, summary } = readTrajectory(bytesOf(new TextEncoder().encode(oem)));
  const stated = /node by (-?[\d.]+) deg and the periapsis by (-?[\d.]+) deg/.exec(reading[2])!;
  const y = path.stateInto(summary.closestApproaches[0].epochTdbS, new Float64Array(6)).slice();
  const from = angles(y);
  const step = 20;
  const k = [0, 1, 2, 3].map(() => new Float64Array(6));
  const probe = new Float64Array(6);
  const wasRising = (): number => y[0] * y[3] + y[1] * y[4] + y[2] * y[5];
  let passes = 0;
  let last = 1;
  let to = from;
  while (passes < REVOLUTIONS) {
    derivativeInto(y, k[0]);
    for (let stage = 1; stage < 4; stage++) {
      const share = stage === 3 ? step : step / 2;
      for (let i = 0; i < 6; i++) probe[i] = y[i] + share * k[stage - 1][i];
      derivativeInto(probe, k[stage]);
    }
    for (let i = 0; i < 6; i++) y[i] += (step / 6) * (k[0][i] + 2 * k[1][i] + 2 * k[2][i] + k[3][i]);
    const now = wasRising();
    if (last < 0 && now >= 0) {
      passes++;
      to = angles(y);
    }
    last = now;
  }
  const degrees = 180 / Math.PI / REVOLUTIONS;
  const node = (to.node - from.node) * degrees;
  const argument = (to.argument - from.argument) * degrees;
  expect(Math.abs(node / Number(stated[1]) - 1), `node ${node} deg a revolution`).toBeLessThan(DRIFT_TOLERANCE_REL);
  expect(Math.abs(argument / Number(stated[2]) - 1), `argument ${argument} deg`).toBeLessThan(DRIFT_TOLERANCE_REL);
});
