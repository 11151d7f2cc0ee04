import { AppError } from '../errors.ts';
import { DafFile, type SpkSummary } from './daf.ts';
import { eclipticToIcrfInPlace } from './names.ts';
import type { ByteSource } from './source.ts';
import { openChebyshev } from './spkChebyshev.ts';
import { openDifferences } from './spkDifferences.ts';
import type { SegmentEvaluator } from './spkRecords.ts';
import { openPolynomialStates, openTwoBodyStates } from './spkStates.ts';

const OPENERS: Readonly<Record<number, (daf: DafFile, summary: SpkSummary) => SegmentEvaluator>> = {
  1: openDifferences,
  2: openChebyshev,
  3: openChebyshev,
  5: openTwoBodyStates,
  8: openPolynomialStates,
  9: openPolynomialStates,
  12: openPolynomialStates,
  13: openPolynomialStates,
  18: openPolynomialStates,
  21: openDifferences,
};
const REFUSED_TYPES: Readonly<Record<number, string>> = {
  10: 'two-line elements about the Earth',
  14: 'Chebyshev polynomials over unequal intervals',
  15: 'precessing conic elements',
  17: 'equinoctial elements',
  19: 'piecewise polynomials of several kinds',
  20: 'Chebyshev polynomials of velocity',
};
const FRAME_J2000 = 1;
const FRAME_ECLIPJ2000 = 17;

/**
 * An SPK kernel: which bodies it knows, when, and where they are. Segments are opened when first needed and read record
 * by record, so the file is never held whole.
 *
 * @throws {AppError} SPK_INVALID when opened or evaluated on damaged contents; SPK_TYPE_REFUSED and FRAME_REFUSED when
 * a segment that is needed cannot be read
 */
export class SpkKernel {
  private readonly daf: DafFile;
  private readonly opened = new Map<SpkSummary, SegmentEvaluator>();
  private readonly byTarget = new Map<number, SpkSummary[]>();

  constructor(source: ByteSource) {
    this.daf = new DafFile(source);
    for (const segment of this.daf.summaries) {
      const known = this.byTarget.get(segment.target);
      if (known === undefined) this.byTarget.set(segment.target, [segment]);
      else known.push(segment);
    }
  }

  get segments(): readonly SpkSummary[] {
    return this.daf.summaries;
  }

  get internalName(): string {
    return this.daf.internalName;
  }

  get comments(): readonly string[] {
    return this.daf.comments;
  }

  get byteOrder(): string {
    return this.daf.littleEndian ? 'little-endian' : 'big-endian';
  }

  /** Bodies with segments of their own, in the order of the file. */
  get targets(): readonly number[] {
    return [...this.byTarget.keys()];
  }

  segmentsOf(target: number): readonly SpkSummary[] {
    return this.byTarget.get(target) ?? [];
  }

  /** The segment in force for a body at an epoch: of those whose interval holds it, the last in the file. */
  segmentAt(target: number, epochTdbS: number): SpkSummary | null {
    const segments = this.byTarget.get(target);
    if (segments === undefined) return null;
    for (let i = segments.length - 1; i >= 0; i--) {
      if (segments[i].startTdbS <= epochTdbS && epochTdbS <= segments[i].stopTdbS) return segments[i];
    }
    return null;
  }

  /** What evaluates a segment, opened once. */
  evaluator(segment: SpkSummary): SegmentEvaluator {
    let evaluator = this.opened.get(segment);
    if (evaluator === undefined) {
      evaluator = this.open(segment);
      this.opened.set(segment, evaluator);
    }
    return evaluator;
  }

  /**
   * State of one body relative to another, km and km/s, ICRF axes, through whatever the kernel carries.
   *
   * @returns false when the kernel does not link the two at this epoch; `out` is then undefined
   */
  stateInto(target: number, center: number, epochTdbS: number, out: Float64Array): boolean {
    const link = this.link(target, center, epochTdbS);
    if (link === null) return false;
    this.sumInto(link, epochTdbS, new Float64Array(6), out);
    return true;
  }

  /** Segments that lead from two bodies to the first body they share, or null. */
  link(target: number, center: number, epochTdbS: number): SpkLink | null {
    const up = this.ancestry(target, epochTdbS);
    const down = this.ancestry(center, epochTdbS);
    for (let i = 0; i < up.bodies.length; i++) {
      const j = down.bodies.indexOf(up.bodies[i]);
      if (j >= 0) return { plus: up.segments.slice(0, i), minus: down.segments.slice(0, j) };
    }
    return null;
  }

  /** Sum of a link; `scratch` and `out` shape (6,). Allocates nothing once the segments are open. */
  sumInto(link: SpkLink, epochTdbS: number, scratch: Float64Array, out: Float64Array): Float64Array {
    out.fill(0, 0, 6);
    for (const segment of link.plus) {
      this.evaluator(segment).stateInto(epochTdbS, scratch);
      for (let i = 0; i < 6; i++) out[i] += scratch[i];
    }
    for (const segment of link.minus) {
      this.evaluator(segment).stateInto(epochTdbS, scratch);
      for (let i = 0; i < 6; i++) out[i] -= scratch[i];
    }
    return out;
  }

  private ancestry(body: number, epochTdbS: number): { bodies: number[]; segments: SpkSummary[] } {
    const bodies = [body];
    const segments: SpkSummary[] = [];
    let current = body;
    for (;;) {
      const segment = this.segmentAt(current, epochTdbS);
      // A centre met before closes a circle: a damaged file, and no way further.
      if (segment === null || bodies.includes(segment.center)) return { bodies, segments };
      segments.push(segment);
      bodies.push(segment.center);
      current = segment.center;
    }
  }

  private open(segment: SpkSummary): SegmentEvaluator {
    const opener = OPENERS[segment.type];
    if (opener === undefined) {
      const what = REFUSED_TYPES[segment.type];
      throw new AppError(
        'SPK_TYPE_REFUSED',
        `Segment "${segment.name}" of body ${segment.target} has SPK data type ${segment.type}${what === undefined ? '' : ` (${what})`}, which is not read.`,
        [{ field: 'data type', detail: 'not among the types that are read', got: segment.type }],
      );
    }
    if (segment.frame !== FRAME_J2000 && segment.frame !== FRAME_ECLIPJ2000) {
      throw new AppError(
        'FRAME_REFUSED',
        `Segment "${segment.name}" of body ${segment.target} is in frame ${segment.frame}; kernels are read in J2000 (1) and ECLIPJ2000 (17).`,
        [{ field: 'frame', detail: 'not an accepted inertial frame', got: segment.frame }],
      );
    }
    const evaluator = opener(this.daf, segment);
    if (segment.frame === FRAME_J2000) return evaluator;
    return {
      method: evaluator.method,
      degree: evaluator.degree,
      count: evaluator.count,
      stateInto(epochTdbS, out) {
        evaluator.stateInto(epochTdbS, out);
        eclipticToIcrfInPlace(out, 0);
      },
    };
  }
}

/** Segments to add and to subtract. */
export interface SpkLink {
  readonly plus: readonly SpkSummary[];
  readonly minus: readonly SpkSummary[];
}
