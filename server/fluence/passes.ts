import type { Path } from '../trajectory/path.ts';
import { SECONDS_PER_DAY } from '../units.ts';

/** Passes within this time of the first share their time variation: one group. */
export const GROUP_S = 30 * SECONDS_PER_DAY;

/** A stretch of path inside the reach of the belts. */
export interface Pass {
  readonly startTdbS: number;
  readonly stopTdbS: number;
  readonly group: number;
}

/** Coarse step of the search, as a share of the local time scale r/v: finds every dip below the outer radius. */
const SEARCH_SHARE = 0.1;
const MAX_SEARCH_STEP_S = 6 * 3600;
const EDGE_TOLERANCE_S = 1;

/**
 * Where a path lies within `outerRadiusKm` of the planet's centre, and which 30-day group each stretch belongs to.
 *
 * @param outerRadiusKm - beyond it the model has no particles
 */
export function findPasses(path: Path, outerRadiusKm: number): Pass[] {
  const state = new Float64Array(6);
  const found: { startTdbS: number; stopTdbS: number }[] = [];
  const radiusAt = (t: number) => {
    path.stateInto(t, state);
    return Math.hypot(state[0], state[1], state[2]);
  };
  const crossing = (outside: number, inside: number): number => {
    let a = outside;
    let b = inside;
    while (Math.abs(b - a) > EDGE_TOLERANCE_S) {
      const middle = 0.5 * (a + b);
      if (radiusAt(middle) > outerRadiusKm) a = middle;
      else b = middle;
    }
    return a;
  };

  for (const span of path.spans) {
    let t = span.startTdbS;
    let inside = radiusAt(t) <= outerRadiusKm;
    let start = t;
    while (t < span.stopTdbS) {
      const radius = Math.hypot(state[0], state[1], state[2]);
      const speed = Math.max(1e-3, Math.hypot(state[3], state[4], state[5]));
      const next = Math.min(t + Math.min(MAX_SEARCH_STEP_S, (SEARCH_SHARE * radius) / speed), span.stopTdbS);
      const nextInside = radiusAt(next) <= outerRadiusKm;
      if (nextInside && !inside) start = crossing(t, next);
      if (!nextInside && inside) found.push({ startTdbS: start, stopTdbS: crossing(next, t) });
      // The search left `state` at a crossing: put it back where the walk goes on.
      radiusAt(next);
      inside = nextInside;
      t = next;
    }
    if (inside) found.push({ startTdbS: start, stopTdbS: span.stopTdbS });
  }

  let group = -1;
  let groupStart = Number.NEGATIVE_INFINITY;
  return found.map((pass) => {
    if (pass.startTdbS - groupStart >= GROUP_S) {
      group += 1;
      groupStart = pass.startTdbS;
    }
    return { ...pass, group };
  });
}
