import type { PathPiece } from './pieces.ts';

/** What a walk along the path found. */
export interface PathSurvey {
  /** Epochs of the local minima of the distance, ascending, TDB s. */
  readonly minimaTdbS: readonly number[];
  /** More minima than are kept. */
  readonly cut: boolean;
  readonly smallestRadiusKm: number;
  readonly smallestRadiusTdbS: number;
  /** The smallest distance lies at the start or end of a stretch of the path, not at a minimum of it. */
  readonly smallestAtBoundary: boolean;
  readonly largestSpeedKmS: number;
}

/** Share of the local dynamical time and of the flight time to the centre that one step may take. */
const STEP_SHARE = 0.1;
/** Where a path would need more steps they are lengthened: a minimum is still seen while a step is below half a revolution. */
const MAX_STEPS = 100_000;
export const MAX_MINIMA = 2000;
const BISECTIONS = 60;

/**
 * Walks the path and finds every local minimum of the distance to the planet's centre.
 *
 * Steps are a tenth of sqrt(r³/GM) and of r/v, whichever is shorter; a change of sign of r·v from − to + between two
 * steps is closed in on by bisection to the spacing of doubles. A minimum at the joint of two touching pieces (a
 * manoeuvre at periapsis) counts once.
 *
 * @param pieces - ascending, disjoint
 */
export function surveyPath(pieces: readonly PathPiece[], gmKm3S2: number): PathSurvey {
  const totalS = pieces.reduce((sum, piece) => sum + piece.stopTdbS - piece.startTdbS, 0);
  const shortestStepS = totalS / MAX_STEPS;
  const state = new Float64Array(6);
  const minima: number[] = [];
  let cut = false;
  let smallest = Number.POSITIVE_INFINITY;
  let smallestAt = Number.NaN;
  let boundary = false;
  let largestSpeed = 0;
  let lastSign = 0;
  let lastStop = Number.NaN;

  const note = (epochTdbS: number, atBoundary: boolean): void => {
    const radius = Math.hypot(state[0], state[1], state[2]);
    if (radius < smallest) {
      smallest = radius;
      smallestAt = epochTdbS;
      boundary = atBoundary;
    }
  };
  const keep = (epochTdbS: number): void => {
    if (minima.length < MAX_MINIMA) minima.push(epochTdbS);
    else cut = true;
  };

  for (let p = 0; p < pieces.length; p++) {
    const piece = pieces[p];
    const follows = piece.startTdbS === lastStop;
    const precedes = p + 1 < pieces.length && pieces[p + 1].startTdbS === piece.stopTdbS;
    let t = piece.startTdbS;
    piece.stateInto(t, state);
    let sign = radialSign(state);
    const jointMinimum = follows && lastSign < 0 && sign > 0;
    if (jointMinimum) keep(t);
    note(t, !follows);
    while (t < piece.stopTdbS) {
      const radius = Math.hypot(state[0], state[1], state[2]);
      const speed = Math.hypot(state[3], state[4], state[5]);
      largestSpeed = Math.max(largestSpeed, speed);
      const dynamicS = Math.sqrt(radius ** 3 / gmKm3S2);
      const step = Math.max(shortestStepS, STEP_SHARE * Math.min(dynamicS, radius / speed));
      // A step that no longer moves the epoch, or is no number, ends at the stop of the piece.
      const next = t + step > t && t + step < piece.stopTdbS ? t + step : piece.stopTdbS;
      piece.stateInto(next, state);
      const nextSign = radialSign(state);
      if (sign < 0 && nextSign >= 0 && !(nextSign === 0 && next === piece.stopTdbS && precedes)) {
        const minimum = nextSign === 0 ? next : bisect(piece, t, next, state);
        piece.stateInto(minimum, state);
        keep(minimum);
        note(minimum, false);
        piece.stateInto(next, state);
      }
      note(next, next === piece.stopTdbS && !precedes);
      if (nextSign !== 0) sign = nextSign;
      t = next;
    }
    lastSign = sign;
    lastStop = piece.stopTdbS;
  }
  return {
    minimaTdbS: minima,
    cut,
    smallestRadiusKm: smallest,
    smallestRadiusTdbS: smallestAt,
    smallestAtBoundary: boundary,
    largestSpeedKmS: largestSpeed,
  };
}

function radialSign(state: Float64Array): number {
  return Math.sign(state[0] * state[3] + state[1] * state[4] + state[2] * state[5]);
}

function bisect(piece: PathPiece, low: number, high: number, state: Float64Array): number {
  for (let i = 0; i < BISECTIONS; i++) {
    const middle = 0.5 * (low + high);
    if (middle <= low || middle >= high) break;
    piece.stateInto(middle, state);
    if (radialSign(state) < 0) low = middle;
    else high = middle;
  }
  return high;
}
