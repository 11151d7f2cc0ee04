import type { Planet } from '../constants/planets.ts';
import { HELD_TAI_MINUS_UTC_S, LAST_LEAP_TDB_S } from '../time/index.ts';
import { MAX_MINIMA, type PathSurvey } from './closestApproach.ts';
import { counted, duration, shown } from './format.ts';
import { NEAR_PLANET_RADII, type NodeReport, velocitiesInconsistent } from './nodeChecks.ts';
import { type PathPiece, safeUtc } from './pieces.ts';
import { SKETCH_ORIGINATOR } from './sketchCommon.ts';
import type { ClosestApproach, TrajectoryNotice, TrajectorySummary } from './types.ts';

/** Nothing in orbit about or passing an outer planet is faster; a larger speed betrays metres. */
const IMPOSSIBLE_SPEED_KM_S = 200;

/** Time between two pieces that nobody covers. */
export function gapsOf(pieces: readonly PathPiece[]): TrajectorySummary['gaps'] {
  const gaps: { startUtc: string; stopUtc: string; durationS: number }[] = [];
  for (let i = 1; i < pieces.length; i++) {
    const durationS = pieces[i].startTdbS - pieces[i - 1].stopTdbS;
    if (durationS > 0) {
      gaps.push({ startUtc: safeUtc(pieces[i - 1].stopTdbS), stopUtc: safeUtc(pieces[i].startTdbS), durationS });
    }
  }
  return gaps;
}

/** At most this many notices of a kind are spelled out; a file of thousands of segments would drown the others. */
const MAX_OF_A_KIND = 20;

/** The notices, with the further ones of a kind counted instead of listed. */
export function limited(notices: readonly TrajectoryNotice[]): TrajectoryNotice[] {
  const kept: TrajectoryNotice[] = [];
  const counts = new Map<string, number>();
  for (const notice of notices) {
    const count = (counts.get(notice.code) ?? 0) + 1;
    counts.set(notice.code, count);
    if (count <= MAX_OF_A_KIND) kept.push(notice);
  }
  for (const notice of notices) {
    const further = (counts.get(notice.code) ?? 0) - MAX_OF_A_KIND;
    if (further <= 0) continue;
    counts.delete(notice.code);
    kept.push({
      ...notice,
      text: `${counted(further)} further notices of the kind "${notice.code}" are not spelled out.`,
    });
  }
  return kept;
}

/** Notices about the path itself, whatever file it came from. */
export function pathNotices(
  planet: Planet,
  pieces: readonly PathPiece[],
  survey: PathSurvey,
  approaches: readonly ClosestApproach[],
  smallestAltitudeKm: number,
  gaps: TrajectorySummary['gaps'],
): TrajectoryNotice[] {
  const notices: TrajectoryNotice[] = [];
  const radii = survey.smallestRadiusKm / planet.equatorialRadiusKm;
  for (const gap of gaps) {
    notices.push({
      code: 'gap',
      severity: 'caution',
      text: `No states are usable from ${gap.startUtc} to ${gap.stopUtc} (${duration(gap.durationS)}); this time counts as no dose.`,
    });
  }
  if (survey.largestSpeedKmS > IMPOSSIBLE_SPEED_KM_S) {
    notices.push({
      code: 'metresForKilometres',
      severity: 'warning',
      text: `The largest speed would be ${shown(survey.largestSpeedKmS)} km/s, and the smallest distance ${shown(radii)} planet radii. The file probably gives metres and m/s where km and km/s are prescribed; nothing was converted.`,
    });
  }
  if (smallestAltitudeKm < 0) {
    notices.push({
      code: 'insidePlanet',
      severity: 'warning',
      text: `The path runs inside the planet: at ${safeUtc(survey.smallestRadiusTdbS)} it is ${shown(-smallestAltitudeKm)} km below the 1-bar level.`,
    });
  }
  if (radii > NEAR_PLANET_RADII) {
    notices.push({
      code: 'outsideBelts',
      severity: 'caution',
      text: `The path stays outside the belts: it comes no closer than ${shown(radii)} planet radii, and no field line closes beyond ${NEAR_PLANET_RADII}.`,
    });
  }
  if (approaches.length === 0) {
    notices.push({
      code: 'noClosestApproach',
      severity: 'caution',
      text: `The distance to the planet has no minimum inside the usable spans; the smallest, ${shown(radii)} planet radii, is at ${safeUtc(survey.smallestRadiusTdbS)}.`,
    });
  } else if (survey.smallestAtBoundary) {
    notices.push({
      code: 'closestAtBoundary',
      severity: 'caution',
      text: `The smallest distance, ${shown(radii)} planet radii, is at the edge of a usable span (${safeUtc(survey.smallestRadiusTdbS)}): the path may be cut where it matters most.`,
    });
  }
  if (survey.cut) {
    notices.push({
      code: 'approachesCut',
      severity: 'info',
      text: `Only the first ${MAX_MINIMA} closest approaches are listed; all of the path is integrated.`,
    });
  }
  if (pieces[pieces.length - 1].stopTdbS > LAST_LEAP_TDB_S) {
    notices.push({
      code: 'leapSecondsHeld',
      severity: 'info',
      text: `The list of leap seconds ends with the step of 2017-01-01; later UTC holds TAI − UTC = ${HELD_TAI_MINUS_UTC_S} s, which is a projection. One second is 0.006° of longitude.`,
    });
  }
  return notices;
}

/** Notices about the states of a text ephemeris. */
export function nodeNotices(planet: Planet, report: NodeReport): TrajectoryNotice[] {
  const notices: TrajectoryNotice[] = [];
  const { coarsest, leaveOneOutKm } = report;
  if (coarsest !== null && coarsest.ratio > 1) {
    const error =
      leaveOneOutKm === null
        ? 'there are too few nodes to estimate the error between them'
        : `leaving out one node at a time moves the path by at most ${shown(leaveOneOutKm, 3)} km (${shown((100 * leaveOneOutKm) / planet.equatorialRadiusKm, 2)} % of a radius), which overstates the error`;
    notices.push({
      code: 'nodeSpacingCoarse',
      severity: 'caution',
      text: `Nodes are ${duration(coarsest.spacingS)} apart at ${shown(coarsest.radiusKm / planet.equatorialRadiusKm, 3)} planet radii, ${shown(coarsest.ratio, 2)} times a tenth of the local dynamical time; ${error}.`,
    });
  }
  if (velocitiesInconsistent(report)) {
    notices.push({
      code: 'velocityInconsistent',
      severity: 'warning',
      text: `Velocities do not belong to the positions: the median of distance over time between nodes is ${shown(report.medianSpeedRatio!, 3)} times the given speed. Check units and axes.`,
    });
  }
  return notices;
}

/** The whole of what was understood, sentence by sentence; notices come beside it. */
export function sentences(planet: Planet, summary: Omit<TrajectorySummary, 'reading'>): string[] {
  const out: string[] = [];
  const by = summary.originator === '' ? '' : ` by ${summary.originator}`;
  const dated = summary.creationDate !== '' && summary.originator !== SKETCH_ORIGINATOR;
  const created = dated ? `, created ${summary.creationDate}` : '';
  const object = summary.objectName === '' ? 'an unnamed object' : summary.objectName;
  out.push(`The file is ${FORMAT_WORDS[summary.format](summary.formatVersion)}${by}${created}: ${object}.`);
  const count = summary.segments.length;
  const states = `${counted(summary.stateCount)} ${summary.format === 'spk' ? 'records' : 'states'}`;
  out.push(
    `It holds ${count === 1 ? 'one segment' : `${count} segments`} with ${states}; usable from ${summary.startUtc} to ${summary.stopUtc}${summary.gaps.length === 0 ? '' : ` with ${summary.gaps.length === 1 ? 'one gap' : `${summary.gaps.length} gaps`}`}.`,
  );
  out.push(
    `States are relative to ${summary.center}, in ${summary.frame} axes, epochs in ${summary.timeSystem}; inside, everything is turned to planet-centred ICRF axes and TDB.`,
  );
  const methods = [
    ...new Set(summary.segments.map((s) => `${s.interpolation}${s.degree === null ? '' : ` of degree ${s.degree}`}`)),
  ];
  out.push(`Between nodes: ${methods.slice(0, 4).join('; ')}. Nothing is interpolated across two segments.`);
  const lowest = lowestOf(summary.closestApproaches);
  if (lowest !== null) {
    const many = summary.closestApproaches.length;
    out.push(
      `${many === 1 ? 'Closest approach' : `${many} closest approaches, the lowest`} at ${lowest.utc}: ${shown(lowest.radiusKm, 7)} km from the centre (${shown(lowest.radiusPlanetRadii)} planet radii), ${shown(lowest.altitudeKm)} km above the 1-bar level of ${planet.name}, ${shown(lowest.speedKmS)} km/s, over latitude ${lowest.latitudeDeg.toFixed(1)}° and east longitude ${lowest.eastLongitudeDeg.toFixed(1)}°.`,
    );
  }
  if (summary.vInfKmS !== null) out.push(`It is a flyby with v∞ = ${shown(summary.vInfKmS)} km/s.`);
  if (summary.periodS !== null) out.push(`It is an orbit with a period of ${duration(summary.periodS)}.`);
  if (summary.interpolationErrorKm !== null) {
    out.push(
      `Leaving out one node at a time within ${NEAR_PLANET_RADII} planet radii moves the path by at most ${shown(summary.interpolationErrorKm, 3)} km.`,
    );
  }
  return out;
}

const FORMAT_WORDS: Readonly<Record<TrajectorySummary['format'], (version: string) => string>> = {
  'oem-kvn': (version) => `an orbit ephemeris message (text, version ${version})`,
  'oem-xml': (version) => `an orbit ephemeris message (XML, version ${version})`,
  csv: () => 'a CSV table of states',
  spk: (version) => `a binary SPK kernel (${version})`,
};

export function lowestOf(approaches: readonly ClosestApproach[]): ClosestApproach | null {
  let lowest: ClosestApproach | null = null;
  for (const approach of approaches) if (lowest === null || approach.radiusKm < lowest.radiusKm) lowest = approach;
  return lowest;
}
