import { PLANETS } from '../constants/planets.ts';
import { type ByteSource, type NodeEphemeris, readCsv, readOemKvn, readOemXml } from '../ephemeris/index.ts';
import { checkNodes } from './nodeChecks.ts';
import { type NodePiece, nodePieces } from './nodePath.ts';
import { safeUtc } from './pieces.ts';
import { nodeNotices } from './reading.ts';
import { SKETCH_ORIGINATOR } from './sketchCommon.ts';
import type { SourceReading } from './sourceReading.ts';
import type { SegmentSummary, TrajectoryNotice, TrajectoryRequest, TrajectorySummary } from './types.ts';

/** Reads a text ephemeris into pieces and what the file says of itself. */
export function readNodes(
  source: ByteSource,
  format: NodeEphemeris['format'],
  request: TrajectoryRequest,
): SourceReading {
  const ephemeris = parse(source, format, request);
  const { planet: planetId, pieces, notices } = nodePieces(ephemeris, request);
  const planet = PLANETS[planetId];
  const report = checkNodes(planet, pieces);
  const used = pieces.map((piece) => piece.segment);
  const names = (pick: (piece: NodePiece) => string): string => [...new Set(pieces.map(pick))].join(', ');
  const centerName = names((piece) => piece.segment.metadata.centerName);
  const frameName = names((piece) => piece.segment.metadata.frameName);
  const facts: SourceReading['facts'] = {
    format,
    formatVersion: ephemeris.version,
    objectName: used[0].metadata.objectName,
    objectId: used[0].metadata.objectId,
    originator: ephemeris.originator,
    creationDate: ephemeris.creationDate,
    center: centerName === '' ? planet.name.toUpperCase() : centerName,
    frame: frameName === '' ? 'ICRF' : frameName,
    timeSystem: used[0].metadata.timeSystem,
    stateCount: used.reduce((sum, segment) => sum + segment.epochsTdbS.length, 0),
    segments: pieces.map(segmentSummary),
    comments: [...ephemeris.comments, ...used.flatMap((segment) => segment.metadata.comments)].slice(0, 400),
    bodies: [],
    interpolationErrorKm: report.leaveOneOutKm,
    nodeSpacingS: report.spacingS,
  };
  return {
    planet: planetId,
    pieces,
    notices: [
      ...assumptionNotices(ephemeris, facts, centerName, frameName),
      ...notices,
      ...nodeNotices(planet, report),
    ],
    facts,
    choices: { targetId: null },
  };
}

function parse(source: ByteSource, format: NodeEphemeris['format'], request: TrajectoryRequest): NodeEphemeris {
  switch (format) {
    case 'oem-kvn':
      return readOemKvn(source);
    case 'oem-xml':
      return readOemXml(source);
    case 'csv':
      return readCsv(source, {
        ...(request.columns === undefined ? {} : { columns: request.columns }),
        ...(request.planet === undefined ? {} : { planetRadiusKm: PLANETS[request.planet].equatorialRadiusKm }),
      });
  }
}

const INTERPOLATION_WORDS = { hermite: 'Hermite', lagrange: 'Lagrange', linear: 'Linear' } as const;

function segmentSummary(piece: NodePiece): SegmentSummary {
  return {
    startUtc: safeUtc(piece.startTdbS),
    stopUtc: safeUtc(piece.stopTdbS),
    stateCount: piece.segment.epochsTdbS.length,
    interpolation: INTERPOLATION_WORDS[piece.segment.metadata.interpolation],
    degree: piece.interpolator.degree,
  };
}

/** What the file left open and how it was taken. */
function assumptionNotices(
  ephemeris: NodeEphemeris,
  facts: Pick<TrajectorySummary, 'center'>,
  centerName: string,
  frameName: string,
): TrajectoryNotice[] {
  const notices: TrajectoryNotice[] = [];
  if (ephemeris.originator === SKETCH_ORIGINATOR) {
    notices.push({
      code: 'sketched',
      severity: 'caution',
      text: 'This path is a sketch by two-body motion, not a designed trajectory; replace it by an ephemeris when there is one.',
    });
  }
  if (centerName === '') {
    notices.push({
      code: 'centerAssumed',
      severity: 'caution',
      text: `The table does not name its centre; the centre of the planet (${facts.center}) was taken.`,
    });
  }
  if (frameName === '') {
    notices.push({
      code: 'frameAssumed',
      severity: 'caution',
      text: 'The table does not name its axes; ICRF (EME2000) was taken.',
    });
  }
  if (ephemeris.segments.some((segment) => !segment.metadata.interpolationStated)) {
    notices.push({
      code: 'interpolationAssumed',
      severity: 'info',
      text: 'The file does not say how to interpolate; Hermite polynomials of degree 7 through four states were taken.',
    });
  }
  const accelerations = ephemeris.segments.reduce((sum, segment) => sum + segment.accelerationCount, 0);
  const covariances = ephemeris.segments.reduce((sum, segment) => sum + segment.covarianceCount, 0);
  if (accelerations + covariances > 0) {
    notices.push({
      code: 'extrasIgnored',
      severity: 'info',
      text: `${accelerations} accelerations and ${covariances} covariance matrices were checked and are not used: they do not enter a dose.`,
    });
  }
  return notices;
}
