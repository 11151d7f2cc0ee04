import { PLANETS } from '../constants/planets.ts';
import type { Path } from './path.ts';
import { writeOem } from './writeOem.ts';

export interface SampledPath {
  readonly path: Path;
  readonly objectName: string;
  readonly objectId?: string;
  readonly originator: string;
  /** UTC, ISO 8601; given by the caller, because nothing here knows the time of day. */
  readonly creationDate: string;
  readonly comments?: readonly string[];
}

/** Share of sqrt(r³/GM) and of r/v between two samples: Hermite of degree 7 then follows the path to metres, also at the ends of a span, where its window is one-sided. */
const SAMPLE_SHARE = 0.05;
/** More than that is no sample any more; the spacing grows evenly where a path is longer. */
const MAX_SAMPLES = 500_000;

/**
 * Any path as an orbit ephemeris message: a block per span, nodes as dense as the local dynamics ask.
 *
 * @returns text in keyword = value notation, TDB, ICRF, planet centre
 */
export function sampledOem(sampled: SampledPath): string {
  const { path } = sampled;
  const planet = PLANETS[path.planet];
  const totalS = path.spans.reduce((sum, span) => sum + span.stopTdbS - span.startTdbS, 0);
  const shortestS = Math.max(totalS / MAX_SAMPLES, 1);
  const state = new Float64Array(6);
  const segments = path.spans
    .filter((span) => span.stopTdbS > span.startTdbS)
    .map((span) => {
      const epochs: number[] = [];
      const states: number[] = [];
      let t = span.startTdbS;
      for (;;) {
        path.stateInto(t, state);
        epochs.push(t);
        for (const value of state) states.push(value);
        if (t === span.stopTdbS) break;
        const radiusKm = Math.hypot(state[0], state[1], state[2]);
        const speedKmS = Math.hypot(state[3], state[4], state[5]);
        const natural = SAMPLE_SHARE * Math.min(Math.sqrt(radiusKm ** 3 / planet.gmKm3S2), radiusKm / speedKmS);
        const step = Math.max(shortestS, natural);
        const leftS = span.stopTdbS - t;
        // The last two steps share what is left: a node close to its neighbour would magnify the printed rounding.
        t = leftS <= step ? span.stopTdbS : t + Math.min(step, leftS / 2);
      }
      return { comments: [], epochsTdbS: epochs, states, interpolation: 'HERMITE' as const, degree: 7 };
    });
  return writeOem({
    objectName: sampled.objectName,
    objectId: sampled.objectId ?? 'UNKNOWN',
    originator: sampled.originator,
    creationDate: sampled.creationDate,
    centerName: planet.name.toUpperCase(),
    headerComments: sampled.comments ?? [],
    segments,
  });
}
