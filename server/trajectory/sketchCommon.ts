import { PLANETS, type PlanetId } from '../constants/planets.ts';
import { AppError, type ErrorPlace } from '../errors.ts';
import { defaultRotationModel } from '../frames/rotation.ts';
import { formatEpoch, utcToTdbS } from '../time/index.ts';
import { RADIAN_PER_DEG } from '../units.ts';
import { type Conic, planeStateInto } from './conic.ts';
import { equatorAxes, orientInto } from './equator.ts';
import { writeOem } from './writeOem.ts';

/** Angles on the planet's equator: node from the equator's ascending node on the ICRF equator, degrees. */
export interface SketchElements {
  /** Periapsis distance from the centre in equatorial radii. */
  readonly periapsisPlanetRadii: number;
  readonly inclinationDeg: number;
  readonly nodeDeg: number;
  readonly argumentDeg: number;
}

export interface SketchBase {
  readonly planet: PlanetId;
  readonly name: string;
  /** UTC of the (first) periapsis, ISO 8601 with or without Z. */
  readonly periapsisUtc: string;
  /** UTC at which the sketch is made, for the header of the message. */
  readonly creationDate?: string;
}

export interface SketchedTrajectory {
  /** The path as an orbit ephemeris message, to be stored and read like an upload. */
  readonly oem: string;
  /** What was drawn, in plain sentences. */
  readonly reading: readonly string[];
}

/** Nodes follow the local dynamical time sqrt(r³/GM); Hermite of degree 7 then errs by metres. */
const NODE_SHARE = 0.08;
export const MAX_NODES = 200_000;
export const SKETCH_ORIGINATOR = 'SIDELONG SKETCH';

/** Angles in force at a time from the (first) periapsis, and how fast they drift. */
interface Orientation {
  readonly node: number;
  readonly argument: number;
  readonly nodeRateRadS?: number;
  readonly argumentRateRadS?: number;
}

export function statesOf(
  request: SketchBase & SketchElements,
  conic: Conic,
  offsets: readonly number[],
  periapsisTdbS: number,
  orientation: (offsetS: number) => Orientation,
): Float64Array {
  const axes = equatorAxes(defaultRotationModel(request.planet), periapsisTdbS);
  const inclination = request.inclinationDeg * RADIAN_PER_DEG;
  const plane = new Float64Array(4);
  const out = new Float64Array(6);
  const states = new Float64Array(6 * offsets.length);
  for (let i = 0; i < offsets.length; i++) {
    planeStateInto(conic, offsets[i], plane);
    const { node, argument, nodeRateRadS = 0, argumentRateRadS = 0 } = orientation(offsets[i]);
    // In a turning frame the velocity gains ω × r; the argument turns inside the plane.
    plane[2] -= argumentRateRadS * plane[1];
    plane[3] += argumentRateRadS * plane[0];
    orientInto(axes, node, inclination, argument, plane, out);
    const [x, y, z] = [out[0], out[1], out[2]];
    out[3] += nodeRateRadS * (axes[7] * z - axes[8] * y);
    out[4] += nodeRateRadS * (axes[8] * x - axes[6] * z);
    out[5] += nodeRateRadS * (axes[6] * y - axes[7] * x);
    states.set(out, 6 * i);
  }
  return states;
}

/** Times from periapsis, symmetric, a share of the local dynamical time apart, ending exactly at ± `reachS`. */
export function nodeOffsets(conic: Conic, reachS: number): number[] {
  const plane = new Float64Array(4);
  const forward: number[] = [];
  let t = 0;
  while (t < reachS && forward.length < MAX_NODES) {
    planeStateInto(conic, t, plane);
    const radiusKm = Math.hypot(plane[0], plane[1]);
    const speedKmS = Math.hypot(plane[2], plane[3]);
    const step = NODE_SHARE * Math.min(Math.sqrt(radiusKm ** 3 / conic.gmKm3S2), radiusKm / speedKmS);
    // The last two steps share what is left: a node close to its neighbour would magnify the printed rounding.
    t = reachS - t <= step ? reachS : t + Math.min(step, (reachS - t) / 2);
    forward.push(t);
  }
  return [...forward.map((offset) => -offset).reverse(), 0, ...forward];
}

/** A number of the request as it is read aloud: nine digits, no trailing zeros. */
export function tidy(value: number): string {
  return String(Number(value.toPrecision(9)));
}

export function orientationSentence(request: SketchElements): string {
  return `Inclination ${tidy(request.inclinationDeg)} deg to the planet's equator (below 90 deg with its rotation), node ${tidy(request.nodeDeg)} deg from the equator's ascending node on the ICRF equator, argument of periapsis ${tidy(request.argumentDeg)} deg.`;
}

export function sketchedOem(
  request: SketchBase,
  reading: readonly string[],
  epochs: readonly number[],
  states: Float64Array,
): string {
  return writeOem({
    objectName: request.name,
    objectId: 'SKETCH',
    originator: SKETCH_ORIGINATOR,
    // The message needs a date. A caller without one gets that of the periapsis, so that the same request makes the
    // same bytes; the reading of a sketch shows no date of making.
    creationDate: request.creationDate ?? formatEpoch(utcToTdbS(request.periapsisUtc), 'UTC', 0),
    centerName: PLANETS[request.planet].name.toUpperCase(),
    headerComments: reading.flatMap((sentence) => wrapped(sentence)),
    segments: [{ comments: [], epochsTdbS: epochs, states, interpolation: 'HERMITE', degree: 7 }],
  });
}

/** Sentences cut at blanks so that each comment line stays within the message's 255 characters. */
function wrapped(sentence: string): string[] {
  return sentence.match(/.{1,200}(?:\s|$)/g)?.map((line) => line.trim()) ?? [];
}

export function checkBase(request: SketchBase): ErrorPlace[] {
  const places: ErrorPlace[] = [];
  if (request.name.trim() === '') places.push({ pointer: '#/name', field: 'name', detail: 'must not be empty' });
  return places;
}

/** Periapsis outside the planet and angles within a turn. */
export function checkElements(places: ErrorPlace[], request: SketchElements): void {
  requireRange(places, 'periapsisPlanetRadii', request.periapsisPlanetRadii, 1.0001, 1000, 'planet radii');
  requireRange(places, 'inclinationDeg', request.inclinationDeg, 0, 180, 'deg');
  requireRange(places, 'nodeDeg', request.nodeDeg, -360, 360, 'deg');
  requireRange(places, 'argumentDeg', request.argumentDeg, -360, 360, 'deg');
}

export function requireRange(
  places: ErrorPlace[],
  field: string,
  value: number,
  low: number,
  high: number,
  unit: string,
): void {
  if (Number.isFinite(value) && value >= low && value <= high) return;
  places.push({
    pointer: `#/${field}`,
    field,
    detail: `must be from ${low} to ${high} ${unit}`,
    got: Number.isFinite(value) ? value : String(value),
    limit: value < low ? low : high,
    unit,
  });
}

export function refuse(places: readonly ErrorPlace[]): void {
  if (places.length === 0) return;
  const first = places[0];
  throw new AppError(
    'SKETCH_INVALID',
    `The sketch is not possible: ${first.field} ${first.detail}, got ${first.got}.`,
    places,
  );
}
