import { PLANETS, type PlanetId } from '../constants/planets.ts';
import { type ByteSource, SpkKernel, type SpkSummary } from '../ephemeris/index.ts';
import { AppError } from '../errors.ts';
import { requireSamePlanet } from './centers.ts';
import { surveyPath } from './closestApproach.ts';
import { GIANT_PLANETS, passNotice } from './giants.ts';
import { barycenterNotice } from './nodePath.ts';
import { safeUtc } from './pieces.ts';
import type { SourceReading } from './sourceReading.ts';
import { type SpkPiece, spkPieces } from './spkPieces.ts';
import type { TrajectoryNotice, TrajectoryRequest } from './types.ts';

const FRAME_NAMES: Readonly<Record<number, string>> = { 1: 'J2000', 17: 'ECLIPJ2000' };
const BODY_NAMES: Readonly<Record<number, string>> = { 0: 'SOLAR SYSTEM BARYCENTER', 10: 'SUN' };

/**
 * Reads an SPK kernel into pieces: the spacecraft relative to the planet through whatever the kernel carries, the
 * planet's own centre where it is there, else its barycentre.
 *
 * @throws {AppError} SPK_INVALID, SPK_TYPE_REFUSED, FRAME_REFUSED, TARGET_NEEDED, PLANET_NEEDED, CENTER_REFUSED
 */
export function readSpk(source: ByteSource, request: TrajectoryRequest): SourceReading {
  const kernel = new SpkKernel(source);
  const target = chooseTarget(kernel, request.targetId);
  const { planet, pieces } = choosePlanet(kernel, target, request.planet);
  const own = [...new Set(pieces.map((piece) => piece.link.plus[0]))];
  const evaluators = own.map((segment) => kernel.evaluator(segment));
  const notices: TrajectoryNotice[] = [];
  if (pieces.some((piece) => piece.barycenter)) notices.push(barycenterNotice(planet));
  notices.push(...otherGiants(kernel, target, planet));
  return {
    planet,
    pieces,
    notices,
    facts: {
      format: 'spk',
      formatVersion: `DAF, ${kernel.byteOrder}, data types ${[...new Set(own.map(({ type }) => type))].join(', ')}`,
      objectName: `NAIF ${target}`,
      objectId: String(target),
      originator: '',
      creationDate: '',
      center: centerText(planet, own, pieces),
      frame: [...new Set(own.map(({ frame }) => FRAME_NAMES[frame]))].join(', '),
      timeSystem: 'TDB',
      stateCount: evaluators.reduce((sum, evaluator) => sum + evaluator.count, 0),
      segments: pieces.map((piece) => {
        const { method, degree, count } = kernel.evaluator(piece.link.plus[0]);
        return {
          startUtc: safeUtc(piece.startTdbS),
          stopUtc: safeUtc(piece.stopTdbS),
          stateCount: count,
          interpolation: method,
          degree,
        };
      }),
      comments: kernel.comments.slice(0, 400),
      bodies: kernel.targets,
      interpolationErrorKm: null,
      nodeSpacingS: null,
    },
    choices: { targetId: target },
  };
}

/** The spacecraft: as asked for, or the only one (spacecraft have negative codes). */
function chooseTarget(kernel: SpkKernel, targetId: number | undefined): number {
  const { targets } = kernel;
  const list = targets.slice(0, 50).join(', ');
  if (targetId !== undefined) {
    if (targets.includes(targetId)) return targetId;
    throw new AppError(
      'TARGET_NEEDED',
      `The kernel has no segment for body ${targetId}; it has ${list || 'none at all'}.`,
      [{ pointer: '#/targetId', field: 'targetId', detail: 'not in the kernel', got: targetId, limit: list }],
    );
  }
  const spacecraft = targets.filter((id) => id < 0);
  if (spacecraft.length === 1) return spacecraft[0];
  const detail =
    spacecraft.length === 0
      ? `The kernel holds no spacecraft (negative code), only ${list || 'nothing'}; name the body by \`targetId\`.`
      : `The kernel holds ${spacecraft.length} spacecraft, ${spacecraft.slice(0, 50).join(', ')}; choose one by \`targetId\`.`;
  throw new AppError('TARGET_NEEDED', detail, [
    {
      pointer: '#/targetId',
      field: 'targetId',
      detail: 'needed',
      limit: spacecraft.length === 0 ? list : spacecraft.slice(0, 50).join(', '),
    },
  ]);
}

function choosePlanet(
  kernel: SpkKernel,
  target: number,
  requested: PlanetId | undefined,
): { planet: PlanetId; pieces: SpkPiece[] } {
  const found = Object.values(PLANETS).flatMap(({ id, naifId, barycenterNaifId }) => {
    if (target === naifId || target === barycenterNaifId) return [];
    const pieces = spkPieces(kernel, target, [naifId, barycenterNaifId]);
    if (pieces.length === 0) return [];
    const direct = kernel.segmentsOf(target).some(({ center }) => center === naifId || center === barycenterNaifId);
    return [{ planet: id, pieces, direct }];
  });
  const centers = [...new Set(kernel.segmentsOf(target).map(({ center }) => bodyName(center)))].join(', ');
  if (found.length === 0) {
    throw new AppError(
      'CENTER_REFUSED',
      `Body ${target} is given relative to ${centers}, and the kernel does not carry what links that to Uranus or Neptune. Add the planet to the kernel or export relative to it.`,
      [{ field: 'center', detail: 'no link to Uranus or Neptune', got: centers }],
    );
  }
  if (requested !== undefined) {
    const match = found.find(({ planet }) => planet === requested);
    if (match !== undefined) return match;
    requireSamePlanet(requested, found[0].planet);
  }
  if (found.length === 1) return found[0];
  const direct = found.filter((candidate) => candidate.direct);
  if (direct.length === 1) return direct[0];
  throw new AppError('PLANET_NEEDED', `The kernel knows body ${target} relative to both planets; give \`planet\`.`, [
    { pointer: '#/planet', field: 'planet', detail: 'both planets are linked', limit: 'uranus, neptune' },
  ]);
}

function bodyName(naifId: number): string {
  const planet = GIANT_PLANETS.find((giant) => giant.naifId === naifId || giant.barycenterNaifId === naifId);
  if (planet !== undefined) {
    return `${planet.name.toUpperCase()}${planet.naifId === naifId ? '' : ' BARYCENTER'}`;
  }
  return BODY_NAMES[naifId] ?? `NAIF ${naifId}`;
}

/** What the states are relative to in the file, and how they come to the planet. */
function centerText(planet: PlanetId, own: readonly SpkSummary[], pieces: readonly SpkPiece[]): string {
  const stated = [...new Set(own.map(({ center }) => bodyName(center)))].join(', ');
  const { name } = PLANETS[planet];
  if (pieces.some((piece) => piece.barycenter) || stated === name.toUpperCase()) return stated;
  return `${stated} and taken to ${name.toUpperCase()} by what the same kernel carries`;
}

/** Passes of other giant planets that the kernel lets us see. */
function otherGiants(kernel: SpkKernel, target: number, planet: PlanetId): TrajectoryNotice[] {
  const notices: TrajectoryNotice[] = [];
  for (const giant of GIANT_PLANETS) {
    if (giant.naifId === PLANETS[planet].naifId || giant.naifId === target || giant.barycenterNaifId === target)
      continue;
    const pieces = spkPieces(kernel, target, [giant.naifId, giant.barycenterNaifId]);
    if (pieces.length === 0) continue;
    const survey = surveyPath(pieces, giant.gmKm3S2);
    notices.push(...passNotice(giant, survey.smallestRadiusKm, survey.smallestRadiusTdbS));
  }
  return notices;
}
