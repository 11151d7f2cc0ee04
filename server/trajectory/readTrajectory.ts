import { createHash } from 'node:crypto';
import { contentHash } from '../canonical.ts';
import { PLANETS } from '../constants/planets.ts';
import { type ByteSource, detectFormat } from '../ephemeris/index.ts';
import { defaultRotationModel } from '../frames/rotation.ts';
import { surveyPath } from './closestApproach.ts';
import { osculating, surfacePoint } from './geometry.ts';
import { readNodes } from './nodeReading.ts';
import { PiecewisePath, safeUtc } from './pieces.ts';
import { gapsOf, limited, lowestOf, pathNotices, sentences } from './reading.ts';
import { readSpk } from './spkReading.ts';
import type { ClosestApproach, TrajectoryReading, TrajectoryRequest, TrajectorySummary } from './types.ts';

const HASH_CHUNK_BYTES = 1 << 20;

/**
 * Reads a trajectory file of any accepted kind: what it says in plain words, and the path to evaluate. The same bytes
 * and request always give the same reading.
 *
 * @throws {AppError} 400 and 422 of the time, ephemeris and trajectory headings of the error list
 */
export function readTrajectory(source: ByteSource, request: TrajectoryRequest = {}): TrajectoryReading {
  const format = detectFormat(source);
  const read = format === 'spk' ? readSpk(source, request) : readNodes(source, format, request);
  const sha256 = sourceSha256(source);
  const planet = PLANETS[read.planet];
  const { pieces } = read;
  const path = new PiecewisePath(
    read.planet,
    pieces,
    contentHash({
      kind: 'trajectory',
      sha256,
      planet: read.planet,
      targetId: read.choices.targetId,
      columns: (request.columns as unknown) ?? null,
    }),
  );
  const survey = surveyPath(pieces, planet.gmKm3S2);
  const rotation = defaultRotationModel(read.planet);
  const state = new Float64Array(6);
  const approaches = survey.minimaTdbS.map((epochTdbS): ClosestApproach => {
    path.stateInto(epochTdbS, state);
    const radiusKm = Math.hypot(state[0], state[1], state[2]);
    return {
      utc: safeUtc(epochTdbS),
      epochTdbS,
      radiusKm,
      radiusPlanetRadii: radiusKm / planet.equatorialRadiusKm,
      speedKmS: Math.hypot(state[3], state[4], state[5]),
      ...surfacePoint(planet, rotation, epochTdbS, state),
    };
  });
  path.stateInto(survey.smallestRadiusTdbS, state);
  const smallestAltitudeKm = surfacePoint(planet, rotation, survey.smallestRadiusTdbS, state).altitudeKm;
  const lowest = lowestOf(approaches);
  if (lowest !== null) path.stateInto(lowest.epochTdbS, state);
  const gaps = gapsOf(pieces);
  const facts: Omit<TrajectorySummary, 'reading'> = {
    ...read.facts,
    name: request.name ?? (read.facts.objectName === '' ? (request.fileName ?? 'Trajectory') : read.facts.objectName),
    planet: read.planet,
    sha256,
    sizeBytes: source.sizeBytes,
    startUtc: safeUtc(pieces[0].startTdbS),
    stopUtc: safeUtc(pieces[pieces.length - 1].stopTdbS),
    spans: pieces.map(({ startTdbS, stopTdbS }) => ({
      startUtc: safeUtc(startTdbS),
      stopUtc: safeUtc(stopTdbS),
      startTdbS,
      stopTdbS,
    })),
    gaps,
    closestApproaches: approaches,
    ...osculating(planet.gmKm3S2, state),
    notices: limited([...read.notices, ...pathNotices(planet, pieces, survey, approaches, smallestAltitudeKm, gaps)]),
  };
  return { summary: { ...facts, reading: sentences(planet, facts) }, path };
}

function sourceSha256(source: ByteSource): string {
  const hash = createHash('sha256');
  for (let at = 0; at < source.sizeBytes; at += HASH_CHUNK_BYTES) {
    hash.update(source.read(at, Math.min(HASH_CHUNK_BYTES, source.sizeBytes - at)));
  }
  return hash.digest('hex');
}
