import type { SpkKernel, SpkLink, SpkSummary } from '../ephemeris/index.ts';
import type { PathPiece } from './pieces.ts';

/** A piece that a fixed set of kernel segments evaluates. */
export interface SpkPiece extends PathPiece {
  readonly link: SpkLink;
  /** Relative to the barycentre, because the kernel does not carry the planet itself. */
  readonly barycenter: boolean;
}

/**
 * Stretches of time in which the kernel links a spacecraft to a planet, each with its segments: between two bounds of
 * any segment that takes part, the segments in force do not change. Neighbours with the same segments are joined.
 *
 * @param centers - NAIF codes of the planet's centre and of its barycentre, in order of preference
 */
export function spkPieces(kernel: SpkKernel, target: number, centers: readonly [number, number]): SpkPiece[] {
  const bounds = boundsOf(kernel, [target, ...centers]);
  const pieces: SpkPiece[] = [];
  for (let i = 0; i + 1 < bounds.length; i++) {
    const startTdbS = bounds[i];
    const stopTdbS = bounds[i + 1];
    const middle = 0.5 * (startTdbS + stopTdbS);
    const direct = kernel.link(target, centers[0], middle);
    const link = direct ?? kernel.link(target, centers[1], middle);
    if (link === null || link.plus.length === 0) continue;
    const last = pieces[pieces.length - 1];
    if (last !== undefined && last.stopTdbS === startTdbS && sameLink(last.link, link)) {
      pieces[pieces.length - 1] = { ...last, stopTdbS };
    } else {
      pieces.push({ startTdbS, stopTdbS, link, barycenter: direct === null, stateInto: evaluatorOf(kernel, link) });
    }
  }
  return pieces;
}

/** Ends of all segments of the bodies and of everything they are given relative to, ascending. */
function boundsOf(kernel: SpkKernel, bodies: readonly number[]): number[] {
  const seen = new Set<number>();
  const waiting = [...bodies];
  const bounds = new Set<number>();
  while (waiting.length > 0) {
    const body = waiting.pop()!;
    if (seen.has(body)) continue;
    seen.add(body);
    for (const segment of kernel.segmentsOf(body)) {
      bounds.add(segment.startTdbS);
      bounds.add(segment.stopTdbS);
      waiting.push(segment.center);
    }
  }
  return [...bounds].sort((a, b) => a - b);
}

function sameLink(a: SpkLink, b: SpkLink): boolean {
  const same = (x: readonly SpkSummary[], y: readonly SpkSummary[]): boolean =>
    x.length === y.length && x.every((segment, i) => segment === y[i]);
  return same(a.plus, b.plus) && same(a.minus, b.minus);
}

function evaluatorOf(kernel: SpkKernel, link: SpkLink): PathPiece['stateInto'] {
  const plus = link.plus.map((segment) => kernel.evaluator(segment));
  const minus = link.minus.map((segment) => kernel.evaluator(segment));
  const scratch = new Float64Array(6);
  return (epochTdbS, out) => {
    plus[0].stateInto(epochTdbS, out);
    for (let k = 1; k < plus.length; k++) {
      plus[k].stateInto(epochTdbS, scratch);
      for (let i = 0; i < 6; i++) out[i] += scratch[i];
    }
    for (let k = 0; k < minus.length; k++) {
      minus[k].stateInto(epochTdbS, scratch);
      for (let i = 0; i < 6; i++) out[i] -= scratch[i];
    }
    return out;
  };
}
