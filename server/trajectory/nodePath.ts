import { PLANETS, type PlanetId } from '../constants/planets.ts';
import { eclipticToIcrfInPlace, type NodeEphemeris, NodeInterpolator, type NodeSegment } from '../ephemeris/index.ts';
import { AppError } from '../errors.ts';
import { centerOf, refuseCenter, requireSamePlanet } from './centers.ts';
import { giantNamed, passNotice } from './giants.ts';
import { type PathPiece, safeUtc } from './pieces.ts';
import type { TrajectoryNotice, TrajectoryRequest } from './types.ts';

/** A piece that a block of a text ephemeris evaluates. */
export interface NodePiece extends PathPiece {
  readonly segment: NodeSegment;
  readonly interpolator: NodeInterpolator;
}

interface NodePieces {
  readonly planet: PlanetId;
  readonly pieces: readonly NodePiece[];
  readonly notices: readonly TrajectoryNotice[];
  readonly barycenter: boolean;
}

/**
 * Pieces of a path from a text ephemeris: blocks about the planet, in order of time, each evaluated by its own
 * interpolation in its usable span. Where usable spans overlap the earlier block counts and the later starts at its
 * end, so no time is integrated twice. Turns ecliptic states to ICRF axes in place.
 *
 * @throws {AppError} CENTER_REFUSED, PLANET_NEEDED, TRAJECTORY_EMPTY
 */
export function nodePieces(ephemeris: NodeEphemeris, request: TrajectoryRequest): NodePieces {
  const notices: TrajectoryNotice[] = [];
  const { planet, used, barycenter } = chooseSegments(ephemeris, request, notices);
  const ordered = [...used].sort((a, b) => a.metadata.usableStartTdbS - b.metadata.usableStartTdbS);
  const pieces: NodePiece[] = [];
  let lastStop = Number.NEGATIVE_INFINITY;
  for (const segment of ordered) {
    const { metadata } = segment;
    const startTdbS = Math.max(metadata.usableStartTdbS, lastStop);
    const stopTdbS = metadata.usableStopTdbS;
    if (lastStop > metadata.usableStartTdbS) {
      notices.push({
        code: 'overlap',
        severity: 'caution',
        text: `The usable spans of two segments overlap from ${safeUtc(metadata.usableStartTdbS)} to ${safeUtc(Math.min(lastStop, stopTdbS))}; the time is counted once, from the segment that starts earlier.`,
      });
    }
    if (!(stopTdbS > startTdbS)) continue;
    if (metadata.frame === 'ECLIPJ2000') {
      for (let i = 0; i < segment.states.length; i += 6) eclipticToIcrfInPlace(segment.states, i);
    }
    const interpolator = new NodeInterpolator(
      segment.epochsTdbS,
      segment.states,
      metadata.interpolation,
      metadata.degree,
    );
    noteInterpolation(segment, interpolator, pieces.length + 1, notices);
    pieces.push({
      startTdbS,
      stopTdbS,
      segment,
      interpolator,
      stateInto: (epochTdbS, out) => interpolator.stateInto(epochTdbS, out),
    });
    lastStop = stopTdbS;
  }
  if (pieces.length === 0) {
    throw new AppError(
      'TRAJECTORY_EMPTY',
      'The usable spans of the file leave no time to evaluate: they end before the states start, or touch them in one instant.',
    );
  }
  return { planet, pieces, notices, barycenter };
}

/** Segments about the one planet; others are left out with a notice, and refused when nothing else is there. */
function chooseSegments(
  ephemeris: NodeEphemeris,
  request: TrajectoryRequest,
  notices: TrajectoryNotice[],
): { planet: PlanetId; used: NodeSegment[]; barycenter: boolean } {
  const named = ephemeris.segments.map((segment) => {
    if (segment.metadata.centerName !== '') return centerOf(segment.metadata.centerName);
    return request.planet === undefined ? null : { planet: request.planet, barycenter: false };
  });
  const planets = new Set(named.flatMap((center) => (center === null ? [] : [center.planet])));
  if (planets.size === 0) {
    const { centerName, lines } = ephemeris.segments[0].metadata;
    if (centerName === '') {
      throw new AppError(
        'PLANET_NEEDED',
        'The table does not say which planet its states are relative to; give `planet`.',
        [{ pointer: '#/planet', field: 'planet', detail: 'needed for a table of states', limit: 'uranus, neptune' }],
      );
    }
    refuseCenter(centerName, lines.get('CENTER_NAME'));
  }
  if (planets.size > 1 && request.planet === undefined) {
    throw new AppError('PLANET_NEEDED', 'The file holds segments about Uranus and about Neptune; give `planet`.', [
      { pointer: '#/planet', field: 'planet', detail: 'two planets in the file', limit: 'uranus, neptune' },
    ]);
  }
  const planet = planets.size === 1 ? [...planets][0] : request.planet!;
  requireSamePlanet(request.planet, planet);
  const used: NodeSegment[] = [];
  let barycenter = false;
  for (let i = 0; i < named.length; i++) {
    const center = named[i];
    const segment = ephemeris.segments[i];
    if (center !== null && center.planet === planet) {
      used.push(segment);
      barycenter ||= center.barycenter;
      continue;
    }
    notices.push({
      code: 'segmentLeftOut',
      severity: 'caution',
      text: `Segment ${i + 1} (${safeUtc(segment.metadata.usableStartTdbS)} to ${safeUtc(segment.metadata.usableStopTdbS)}) is relative to "${segment.metadata.centerName}" and is left out: that time counts as no dose.`,
    });
    notices.push(...passOfLeftOut(segment));
  }
  if (barycenter) notices.push(barycenterNotice(planet));
  return { planet, used, barycenter };
}

/** Whether a left-out segment about another giant planet passes close to it, judged by its nodes. */
function passOfLeftOut(segment: NodeSegment): TrajectoryNotice[] {
  const giant = giantNamed(segment.metadata.centerName);
  if (giant === null) return [];
  let smallestKm = Number.POSITIVE_INFINITY;
  let at = 0;
  for (let i = 0; i < segment.epochsTdbS.length; i++) {
    const radiusKm = Math.hypot(segment.states[6 * i], segment.states[6 * i + 1], segment.states[6 * i + 2]);
    if (radiusKm < smallestKm) {
      smallestKm = radiusKm;
      at = i;
    }
  }
  return passNotice(giant, smallestKm, segment.epochsTdbS[at]);
}

export function barycenterNotice(planet: PlanetId): TrajectoryNotice {
  const { name, barycenterOffsetKm, equatorialRadiusKm } = PLANETS[planet];
  const percent = ((100 * barycenterOffsetKm) / equatorialRadiusKm).toFixed(2);
  return {
    code: 'barycenter',
    severity: 'caution',
    text: `States are relative to the barycentre of the ${name} system and are used as if it were the planet's centre; the two are at most ${barycenterOffsetKm} km apart (${percent} % of a radius).`,
  };
}

function noteInterpolation(
  segment: NodeSegment,
  interpolator: NodeInterpolator,
  number: number,
  notices: TrajectoryNotice[],
): void {
  const { metadata } = segment;
  if (metadata.degreeRoundedFrom !== null) {
    notices.push({
      code: 'degreeRounded',
      severity: 'info',
      text: `Segment ${number} asks for Hermite interpolation of degree ${metadata.degreeRoundedFrom}; a Hermite polynomial through states has an odd degree, ${metadata.degree} is used.`,
    });
  }
  if (interpolator.degree < metadata.degree) {
    notices.push({
      code: 'degreeLowered',
      severity: 'caution',
      text: `Segment ${number} has ${segment.epochsTdbS.length} states, too few for degree ${metadata.degree}; degree ${interpolator.degree} is used.`,
    });
  }
}
