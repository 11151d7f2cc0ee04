import type { PlanetId } from '../constants/planets.ts';
import { AppError } from '../errors.ts';
import { formatUtc } from '../time/index.ts';
import type { Path, PathSpan } from './path.ts';

/** A span with what evaluates it: one block of a message, or one chain of kernel segments. */
export interface PathPiece extends PathSpan {
  /** Epoch inside the span, TDB s; out shape (6,), km and km/s, ICRF axes, planet centre. Not checked here. */
  stateInto(epochTdbS: number, out: Float64Array): Float64Array;
}

/** A path of pieces; remembers the piece of the last epoch, so sweeping in time finds it at once. */
export class PiecewisePath implements Path {
  readonly planet: PlanetId;
  readonly inputsSha256: string;
  readonly pieces: readonly PathPiece[];
  private current = 0;

  /** @param pieces - ascending and disjoint, sharing at most endpoints; at least one */
  constructor(planet: PlanetId, pieces: readonly PathPiece[], inputsSha256: string) {
    this.planet = planet;
    this.pieces = pieces;
    this.inputsSha256 = inputsSha256;
  }

  get spans(): readonly PathSpan[] {
    return this.pieces;
  }

  stateInto(epochTdbS: number, out: Float64Array): Float64Array {
    const piece = this.pieces[this.current];
    if (epochTdbS >= piece.startTdbS && epochTdbS <= piece.stopTdbS) return piece.stateInto(epochTdbS, out);
    return this.locate(epochTdbS).stateInto(epochTdbS, out);
  }

  private locate(epochTdbS: number): PathPiece {
    const { pieces } = this;
    let low = 0;
    let high = pieces.length;
    while (high - low > 1) {
      const middle = (low + high) >> 1;
      if (pieces[middle].startTdbS <= epochTdbS) low = middle;
      else high = middle;
    }
    const piece = pieces[low];
    if (epochTdbS >= piece.startTdbS && epochTdbS <= piece.stopTdbS) {
      this.current = low;
      return piece;
    }
    const shown = Number.isFinite(epochTdbS) && Math.abs(epochTdbS) < 1e11 ? safeUtc(epochTdbS) : String(epochTdbS);
    throw new AppError(
      'TRAJECTORY_OUTSIDE_SPAN',
      `${shown} lies in none of the ${pieces.length} usable spans between ${safeUtc(pieces[0].startTdbS)} and ${safeUtc(pieces[pieces.length - 1].stopTdbS)}.`,
    );
  }
}

/** UTC, or the bare TDB seconds before 1972, where UTC has no present form. */
export function safeUtc(epochTdbS: number): string {
  try {
    return formatUtc(epochTdbS);
  } catch (cause) {
    if (cause instanceof RangeError) return `${epochTdbS} s TDB past J2000`;
    throw cause;
  }
}
