import type { TimeScale } from '../time/index.ts';

/** Axes that states may come in; both inertial, EME2000 = J2000 = ICRF for this purpose. */
export type InputFrame = 'ICRF' | 'ECLIPJ2000';
export type InterpolationKind = 'hermite' | 'lagrange' | 'linear';

/** What one block of a message says about itself. */
export interface SegmentMetadata {
  readonly objectName: string;
  readonly objectId: string;
  /** CENTER_NAME as written. */
  readonly centerName: string;
  /** REF_FRAME as written. */
  readonly frameName: string;
  readonly frame: InputFrame;
  readonly timeSystem: TimeScale;
  readonly interpolation: InterpolationKind;
  readonly degree: number;
  /** False where the file does not say how to interpolate and the default was taken. */
  readonly interpolationStated: boolean;
  /** The degree as written when it had to be rounded down to an odd one (Hermite), else null. */
  readonly degreeRoundedFrom: number | null;
  readonly usableStartTdbS: number;
  readonly usableStopTdbS: number;
  readonly comments: readonly string[];
  /** 1-based line of each keyword, for messages. */
  readonly lines: ReadonlyMap<string, number>;
}

/** A block of states between which one may interpolate; never across two of them. */
export interface NodeSegment {
  readonly metadata: SegmentMetadata;
  /** Shape (n,), TDB seconds past J2000, strictly ascending. */
  readonly epochsTdbS: Float64Array;
  /** Shape (n, 6) by rows: position km, velocity km/s, axes of `metadata.frame`. */
  readonly states: Float64Array;
  readonly accelerationCount: number;
  readonly covarianceCount: number;
}

/** A text ephemeris as read: checked against its own grammar, not yet against a planet. */
export interface NodeEphemeris {
  readonly format: 'oem-kvn' | 'oem-xml' | 'csv';
  readonly version: string;
  readonly creationDate: string;
  readonly originator: string;
  readonly messageId: string;
  readonly classification: string;
  readonly comments: readonly string[];
  readonly segments: readonly NodeSegment[];
}

/** States that one file may hold: 230 MB of numbers, four years at a state every half minute. */
export const MAX_STATES = 4_000_000;

/** Rows of states that grow by doubling. */
export class NodeRows {
  count = 0;
  private epochs = new Float64Array(0);
  private values = new Float64Array(0);
  private expected = 0;

  /** How many rows will probably come, so that doubling does not overshoot. */
  expect(rows: number): void {
    this.expected = rows;
  }

  private reserve(rows: number): void {
    if (rows <= this.epochs.length) return;
    const epochs = new Float64Array(rows);
    epochs.set(this.epochs.subarray(0, this.count));
    this.epochs = epochs;
    const values = new Float64Array(rows * 6);
    values.set(this.values.subarray(0, this.count * 6));
    this.values = values;
  }

  /** @param state - first six values are taken */
  push(epochTdbS: number, state: Float64Array): void {
    const { count } = this;
    if (count === this.epochs.length) {
      const doubled = Math.max(64, 2 * count);
      this.reserve(this.expected > count && this.expected < doubled ? this.expected : doubled);
    }
    this.epochs[count] = epochTdbS;
    const at = count * 6;
    for (let i = 0; i < 6; i++) this.values[at + i] = state[i];
    this.count++;
  }

  get lastEpochTdbS(): number {
    return this.count === 0 ? Number.NEGATIVE_INFINITY : this.epochs[this.count - 1];
  }

  get firstEpochTdbS(): number {
    return this.epochs[0];
  }

  /** The rows, trimmed when more than an eighth was reserved in vain. */
  finish(): { epochsTdbS: Float64Array; states: Float64Array } {
    const wasteful = this.epochs.length > 1.125 * this.count;
    return {
      epochsTdbS: wasteful ? this.epochs.slice(0, this.count) : this.epochs.subarray(0, this.count),
      states: wasteful ? this.values.slice(0, 6 * this.count) : this.values.subarray(0, 6 * this.count),
    };
  }
}

/** Comment lines kept for the reading: enough to show what a producer wrote, bounded against files made of comments. */
export class CommentList {
  readonly lines: string[] = [];

  add(text: string): void {
    if (this.lines.length < 400) this.lines.push(text.slice(0, 254));
  }
}
