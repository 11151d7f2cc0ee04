import { PLANETS } from '../constants/planets.ts';
import { defaultRotationModel } from '../frames/rotation.ts';
import { utcToTdbS } from '../time/index.ts';
import { DEG_PER_RADIAN, RADIAN_PER_DEG } from '../units.ts';
import { type Conic, timeToRadiusS } from './conic.ts';
import { equatorAxes } from './equator.ts';
import {
  checkBase,
  checkElements,
  nodeOffsets,
  orientationSentence,
  refuse,
  requireRange,
  type SketchBase,
  type SketchElements,
  type SketchedTrajectory,
  sketchedOem,
  statesOf,
  tidy,
} from './sketchCommon.ts';

/** A flyby by its periapsis, speed and orientation on the planet's equator. */
export interface ElementFlybySketch extends SketchBase, SketchElements {
  readonly vInfKmS: number;
  /** Where the path starts and stops, equatorial radii; default 60. */
  readonly limitPlanetRadii?: number;
}

/**
 * A flyby by its arrival: v∞ and the point of the B-plane. S along v∞, T = S × pole normalised (in the plane of the
 * planet's equator, pole = spin pole), R = S × T.
 */
export interface BPlaneFlybySketch extends SketchBase {
  /** Incoming v∞, ICRF axes, km/s. */
  readonly vInfIcrfKmS: readonly [number, number, number];
  readonly bDotTKm: number;
  readonly bDotRKm: number;
  readonly limitPlanetRadii?: number;
}

export type FlybySketch = ElementFlybySketch | BPlaneFlybySketch;

const DEFAULT_LIMIT_RADII = 60;

/**
 * A flyby as a hyperbola about the planet alone, from periapsis, v∞ and orientation on the planet's equator, or from
 * the incoming v∞ and its point in the B-plane.
 *
 * @throws {AppError} SKETCH_INVALID naming every faulty field; EPOCH_UNREADABLE
 */
export function sketchFlyby(sketch: FlybySketch): SketchedTrajectory {
  const planet = PLANETS[sketch.planet];
  const request = 'vInfIcrfKmS' in sketch ? elementsOfBPlane(sketch) : sketch;
  const limit = request.limitPlanetRadii ?? DEFAULT_LIMIT_RADII;
  const places = checkBase(request);
  checkElements(places, request);
  requireRange(places, 'vInfKmS', request.vInfKmS, 0.01, 100, 'km/s');
  requireRange(
    places,
    'limitPlanetRadii',
    limit,
    Math.max(2, 1.5 * request.periapsisPlanetRadii),
    5000,
    'planet radii',
  );
  refuse(places);
  const periapsisTdbS = utcToTdbS(request.periapsisUtc);
  const periapsisKm = request.periapsisPlanetRadii * planet.equatorialRadiusKm;
  const conic: Conic = {
    gmKm3S2: planet.gmKm3S2,
    periapsisKm,
    eccentricity: 1 + (periapsisKm * request.vInfKmS ** 2) / planet.gmKm3S2,
  };
  const reachS = timeToRadiusS(conic, limit * planet.equatorialRadiusKm);
  const offsets = nodeOffsets(conic, reachS);
  const epochs = offsets.map((offset) => periapsisTdbS + offset);
  const states = statesOf(request, conic, offsets, periapsisTdbS, () => ({
    node: request.nodeDeg * RADIAN_PER_DEG,
    argument: request.argumentDeg * RADIAN_PER_DEG,
  }));
  const turnDeg = (2 * Math.asin(1 / conic.eccentricity)) / RADIAN_PER_DEG;
  const reading = [
    `A flyby of ${planet.name}, sketched as a hyperbola about the planet alone: periapsis ${tidy(request.periapsisPlanetRadii)} planet radii (${periapsisKm.toFixed(1)} km) at ${request.periapsisUtc}, v-infinity ${tidy(request.vInfKmS)} km/s, eccentricity ${conic.eccentricity.toFixed(6)}, turn ${turnDeg.toFixed(3)} deg.`,
    orientationSentence(request),
    `It runs from ${limit} to ${limit} planet radii, ${(reachS / 3600).toFixed(2)} h on either side. Oblateness, satellites and the Sun are left out.`,
  ];
  return { oem: sketchedOem(request, reading, epochs, states), reading };
}

/**
 * Elements of the hyperbola that comes in along v∞ through a point of the B-plane.
 *
 * With b = |B| and a = GM/v∞²: e = sqrt(1 + (b/a)²), r_p = a (e − 1); towards periapsis P = S/e + B̂ sqrt(1 − 1/e²),
 * along the motion there Q = S sqrt(1 − 1/e²) − B̂/e.
 *
 * @throws {AppError} SKETCH_INVALID; EPOCH_UNREADABLE
 * @source Kizner (1961), Planetary and Space Science 7, 125 (B-plane); Vallado (2013), section 12.4.3
 */
function elementsOfBPlane(sketch: BPlaneFlybySketch): ElementFlybySketch {
  const places = checkBase(sketch);
  const vInfKmS = Math.hypot(...sketch.vInfIcrfKmS);
  requireRange(places, 'vInfIcrfKmS', vInfKmS, 0.01, 100, 'km/s');
  requireRange(places, 'bDotTKm', sketch.bDotTKm, -1e9, 1e9, 'km');
  requireRange(places, 'bDotRKm', sketch.bDotRKm, -1e9, 1e9, 'km');
  refuse(places);
  const axes = equatorAxes(defaultRotationModel(sketch.planet), utcToTdbS(sketch.periapsisUtc));
  const [x, y, z] = sketch.vInfIcrfKmS;
  // S in equator axes, where the pole is (0, 0, 1): S × pole = (S_y, −S_x, 0).
  const s = [0, 3, 6].map((row) => (axes[row] * x + axes[row + 1] * y + axes[row + 2] * z) / vInfKmS);
  const across = Math.hypot(s[0], s[1]);
  const bKm = Math.hypot(sketch.bDotTKm, sketch.bDotRKm);
  if (across < 1e-9 || bKm === 0) {
    const field = bKm === 0 ? 'bDotTKm' : 'vInfIcrfKmS';
    const detail = bKm === 0 ? 'B = 0 hits the centre of the planet' : 'v∞ along the pole leaves the axis T undefined';
    refuse([{ pointer: `#/${field}`, field, detail, got: bKm === 0 ? 0 : sketch.vInfIcrfKmS.join(', ') }]);
  }
  const t = [s[1] / across, -s[0] / across, 0];
  const r = [s[1] * t[2] - s[2] * t[1], s[2] * t[0] - s[0] * t[2], s[0] * t[1] - s[1] * t[0]];
  const unitB = [0, 1, 2].map((i) => (sketch.bDotTKm * t[i] + sketch.bDotRKm * r[i]) / bKm);
  const { gmKm3S2, equatorialRadiusKm } = PLANETS[sketch.planet];
  const semiKm = gmKm3S2 / vInfKmS ** 2;
  const e = Math.hypot(1, bKm / semiKm);
  const sine = Math.sqrt(1 - 1 / (e * e));
  const p = [0, 1, 2].map((i) => s[i] / e + unitB[i] * sine);
  const q = [0, 1, 2].map((i) => s[i] * sine - unitB[i] / e);
  const w = [p[1] * q[2] - p[2] * q[1], p[2] * q[0] - p[0] * q[2], p[0] * q[1] - p[1] * q[0]];
  const flat = Math.hypot(w[0], w[1]) < 1e-12;
  return {
    planet: sketch.planet,
    name: sketch.name,
    periapsisUtc: sketch.periapsisUtc,
    ...(sketch.creationDate === undefined ? {} : { creationDate: sketch.creationDate }),
    // e − 1 = (b/a)² / (e + 1) keeps its digits for small B.
    periapsisPlanetRadii: (bKm * bKm) / semiKm / (e + 1) / equatorialRadiusKm,
    vInfKmS,
    inclinationDeg: Math.atan2(Math.hypot(w[0], w[1]), w[2]) * DEG_PER_RADIAN,
    // In the plane of the equator the node is free: it is put on the x axis.
    nodeDeg: flat ? 0 : Math.atan2(w[0], -w[1]) * DEG_PER_RADIAN,
    argumentDeg: (flat ? Math.atan2(p[1] * Math.sign(w[2]), p[0]) : Math.atan2(p[2], q[2])) * DEG_PER_RADIAN,
    ...(sketch.limitPlanetRadii === undefined ? {} : { limitPlanetRadii: sketch.limitPlanetRadii }),
  };
}
