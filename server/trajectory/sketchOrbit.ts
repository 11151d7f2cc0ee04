import { PLANETS } from '../constants/planets.ts';
import { AppError } from '../errors.ts';
import { utcToTdbS } from '../time/index.ts';
import { RADIAN_PER_DEG } from '../units.ts';
import { type Conic, meanMotionRadS } from './conic.ts';
import {
  checkBase,
  checkElements,
  MAX_NODES,
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

export interface OrbitSketch extends SketchBase, SketchElements {
  /** Exactly one of period and apoapsis. */
  readonly periodDays?: number;
  readonly apoapsisPlanetRadii?: number;
  /** Periapsis passes; default 1. */
  readonly passes?: number;
}

const MAX_PASSES = 500;

/**
 * An orbit as an ellipse whose node and periapsis drift by J2; it starts half a period before the first periapsis and
 * stops half a period after the last.
 *
 * Drift: dΩ/dt = −(3/2) n J2 (R/p)² cos i, dω/dt = (3/4) n J2 (R/p)² (5 cos² i − 1).
 *
 * @throws {AppError} SKETCH_INVALID naming every faulty field; EPOCH_UNREADABLE
 * @source Vallado (2013), Fundamentals of Astrodynamics, 4th ed., eq. 9-37 and 9-39 (first-order secular rates)
 */
export function sketchOrbit(request: OrbitSketch): SketchedTrajectory {
  const planet = PLANETS[request.planet];
  const passes = request.passes ?? 1;
  const places = checkBase(request);
  checkElements(places, request);
  const given = [request.periodDays, request.apoapsisPlanetRadii].filter((value) => value !== undefined).length;
  if (given !== 1) {
    places.push({
      pointer: '#/periodDays',
      field: 'periodDays',
      detail: 'give exactly one of periodDays and apoapsisPlanetRadii',
      got: given,
      limit: 1,
    });
  }
  if (request.periodDays !== undefined) requireRange(places, 'periodDays', request.periodDays, 0.05, 3650, 'd');
  if (request.apoapsisPlanetRadii !== undefined) {
    requireRange(
      places,
      'apoapsisPlanetRadii',
      request.apoapsisPlanetRadii,
      request.periapsisPlanetRadii,
      2000,
      'planet radii',
    );
  }
  if (!Number.isInteger(passes))
    places.push({ pointer: '#/passes', field: 'passes', detail: 'must be a whole number', got: passes });
  requireRange(places, 'passes', passes, 1, MAX_PASSES, 'passes');
  refuse(places);
  const periapsisKm = request.periapsisPlanetRadii * planet.equatorialRadiusKm;
  const semiMajorKm =
    request.periodDays === undefined
      ? 0.5 * (periapsisKm + request.apoapsisPlanetRadii! * planet.equatorialRadiusKm)
      : Math.cbrt(planet.gmKm3S2 * ((request.periodDays * 86_400) / (2 * Math.PI)) ** 2);
  if (semiMajorKm < periapsisKm * (1 - 1e-12)) {
    throw new AppError(
      'SKETCH_INVALID',
      `A period of ${request.periodDays} d belongs to a semi-major axis of ${semiMajorKm.toFixed(0)} km, less than the periapsis distance of ${periapsisKm.toFixed(0)} km.`,
      [
        {
          pointer: '#/periodDays',
          field: 'periodDays',
          detail: 'too short for this periapsis',
          got: request.periodDays!,
          unit: 'd',
        },
      ],
    );
  }
  const conic: Conic = {
    gmKm3S2: planet.gmKm3S2,
    periapsisKm,
    eccentricity: Math.max(1e-9, 1 - periapsisKm / semiMajorKm),
  };
  const n = meanMotionRadS(conic);
  const periodS = (2 * Math.PI) / n;
  const periapsisTdbS = utcToTdbS(request.periapsisUtc);
  const inclinationRad = request.inclinationDeg * RADIAN_PER_DEG;
  const parameterKm = semiMajorKm * (1 - conic.eccentricity ** 2);
  const strength = n * planet.j2 * (planet.gravityRadiusKm / parameterKm) ** 2;
  const nodeRateRadS = -1.5 * strength * Math.cos(inclinationRad);
  const argumentRateRadS = 0.75 * strength * (5 * Math.cos(inclinationRad) ** 2 - 1);
  const half = nodeOffsets(conic, periodS / 2);
  if (half.length * passes > MAX_NODES) {
    throw new AppError(
      'SKETCH_INVALID',
      `The orbit needs ${half.length * passes} states; at most ${MAX_NODES} are written. Ask for fewer passes.`,
      [{ pointer: '#/passes', field: 'passes', detail: 'too many states', got: passes }],
    );
  }
  const offsets: number[] = [];
  for (let pass = 0; pass < passes; pass++) {
    for (const offset of half) if (pass === 0 || offset > half[0]) offsets.push(offset + pass * periodS);
  }
  const epochs = offsets.map((offset) => periapsisTdbS + offset);
  const states = statesOf(request, conic, offsets, periapsisTdbS, (offsetS) => ({
    node: request.nodeDeg * RADIAN_PER_DEG + nodeRateRadS * offsetS,
    argument: request.argumentDeg * RADIAN_PER_DEG + argumentRateRadS * offsetS,
    nodeRateRadS,
    argumentRateRadS,
  }));
  const perPassDeg = (rate: number): string => ((rate * periodS) / RADIAN_PER_DEG).toFixed(4);
  const reading = [
    `An orbit of ${planet.name}, sketched as an ellipse: periapsis ${tidy(request.periapsisPlanetRadii)} planet radii (${periapsisKm.toFixed(1)} km), first at ${request.periapsisUtc}, semi-major axis ${semiMajorKm.toFixed(1)} km, eccentricity ${conic.eccentricity.toFixed(6)}, period ${(periodS / 86_400).toFixed(4)} d, passes: ${passes}.`,
    orientationSentence(request),
    `J2 turns the node by ${perPassDeg(nodeRateRadS)} deg and the periapsis by ${perPassDeg(argumentRateRadS)} deg a revolution (first-order secular rates). Satellites, the Sun and higher harmonics are left out.`,
  ];
  return { oem: sketchedOem(request, reading, epochs, states), reading };
}
