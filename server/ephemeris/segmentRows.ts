import { oemInvalid, type SegmentSpan, SPAN_ROUNDING_S } from './metadata.ts';
import { MAX_STATES, NodeRows, type NodeSegment } from './nodes.ts';

/** States of one block of a message, checked row by row against each other and against START_TIME and STOP_TIME. */
export class SegmentRows {
  readonly span: SegmentSpan;
  readonly rows = new NodeRows();
  covarianceCount = 0;
  private accelerationCount = 0;
  private lastCovarianceTdbS = Number.NEGATIVE_INFINITY;

  private readonly earlierStates: number;

  /** @param earlier - the blocks before this one */
  constructor(span: SegmentSpan, earlier: readonly NodeSegment[]) {
    this.span = span;
    this.earlierStates = earlier.reduce((sum, segment) => sum + segment.epochsTdbS.length, 0);
  }

  /** @param numberCount - 6, or 9 with accelerations */
  push(epochTdbS: number, state: Float64Array, numberCount: number, line: number): void {
    const last = this.rows.lastEpochTdbS;
    if (!(epochTdbS > last)) {
      const what =
        epochTdbS === last ? 'repeats the epoch of the state before it' : 'is earlier than the state before it';
      throw oemInvalid(line, 'epoch', `${what}; epochs must ascend`);
    }
    if (epochTdbS < this.span.startTdbS - SPAN_ROUNDING_S) {
      throw oemInvalid(line, 'epoch', 'lies before the START_TIME of its block');
    }
    if (epochTdbS > this.span.stopTdbS + SPAN_ROUNDING_S) {
      throw oemInvalid(line, 'epoch', 'lies after the STOP_TIME of its block');
    }
    if (this.rows.count + this.earlierStates >= MAX_STATES) {
      throw oemInvalid(line, '', `the file holds more than ${MAX_STATES} states; thin it out`);
    }
    if (numberCount > 6) this.accelerationCount++;
    this.rows.push(epochTdbS, state);
  }

  pushCovariance(epochTdbS: number, line: number): void {
    if (!(epochTdbS > this.lastCovarianceTdbS)) {
      throw oemInvalid(line, 'EPOCH', 'covariance epochs must ascend');
    }
    this.lastCovarianceTdbS = epochTdbS;
    this.covarianceCount++;
  }

  /**
   * @param line - last line of the block
   * @throws {AppError} OEM_INVALID when the block has fewer than two states or the states do not reach its bounds
   */
  finish(line: number): NodeSegment {
    const { rows, span } = this;
    const { metadata } = span;
    if (rows.count < 2) {
      throw oemInvalid(line, '', `the block that ends here has ${rows.count} states; at least 2 are needed`);
    }
    if (rows.firstEpochTdbS > span.startTdbS + SPAN_ROUNDING_S) {
      throw oemInvalid(
        metadata.lines.get('START_TIME') ?? line,
        'START_TIME',
        `is ${(rows.firstEpochTdbS - span.startTdbS).toFixed(3)} s before the first state; the states must reach it`,
      );
    }
    if (rows.lastEpochTdbS < span.stopTdbS - SPAN_ROUNDING_S) {
      throw oemInvalid(
        metadata.lines.get('STOP_TIME') ?? line,
        'STOP_TIME',
        `is ${(span.stopTdbS - rows.lastEpochTdbS).toFixed(3)} s after the last state; the file may be truncated`,
      );
    }
    return {
      ...rows.finish(),
      metadata: {
        ...metadata,
        usableStartTdbS: Math.max(metadata.usableStartTdbS, rows.firstEpochTdbS),
        usableStopTdbS: Math.min(metadata.usableStopTdbS, rows.lastEpochTdbS),
      },
      accelerationCount: this.accelerationCount,
      covarianceCount: this.covarianceCount,
    };
  }
}
