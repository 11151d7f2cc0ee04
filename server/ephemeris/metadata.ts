import { AppError } from '../errors.ts';
import { parseEpoch, type TimeScale } from '../time/index.ts';
import { frameOf, plainName, timeScaleOf } from './names.ts';
import { CommentList, type InterpolationKind, type SegmentMetadata } from './nodes.ts';

/** Rounding of START_TIME and STOP_TIME that writers allow themselves against the printed nodes, s. */
export const SPAN_ROUNDING_S = 1e-3;
/** Default where a file is silent: Hermite on four states. */
const DEFAULT_DEGREE = 7;
export const MAX_DEGREE = 27;

const MANDATORY = ['OBJECT_NAME', 'OBJECT_ID', 'CENTER_NAME', 'REF_FRAME', 'TIME_SYSTEM', 'START_TIME', 'STOP_TIME'];
const OPTIONAL = [
  'REF_FRAME_EPOCH',
  'USEABLE_START_TIME',
  'USEABLE_STOP_TIME',
  'INTERPOLATION',
  'INTERPOLATION_DEGREE',
];
const HEADER_MANDATORY = ['CREATION_DATE', 'ORIGINATOR'];
const HEADER_OPTIONAL = ['CLASSIFICATION', 'MESSAGE_ID'];
const VERSIONS = ['1.0', '2.0', '3.0'];

export function oemInvalid(line: number, field: string, detail: string, got?: string | number): AppError {
  const text = `Line ${line}${field === '' ? '' : `, ${field}`}: ${detail}${got === undefined ? '' : `, got "${got}"`}.`;
  return new AppError('OEM_INVALID', text, [
    { line, detail, ...(field === '' ? {} : { field }), ...(got === undefined ? {} : { got }) },
  ]);
}

/** Keywords of one block, each at most once, with the lines they stand on. */
class KeywordBlock {
  readonly lines = new Map<string, number>();
  readonly comments = new CommentList();
  private readonly values = new Map<string, string>();
  private readonly known: ReadonlySet<string>;
  private readonly blockName: string;

  constructor(blockName: string, known: readonly string[]) {
    this.blockName = blockName;
    this.known = new Set(known);
  }

  set(keyword: string, value: string, line: number): void {
    if (!this.known.has(keyword)) {
      throw oemInvalid(
        line,
        keyword.slice(0, 40),
        `this keyword does not belong in the ${this.blockName} of an orbit ephemeris message`,
      );
    }
    const earlier = this.lines.get(keyword);
    if (earlier !== undefined) throw oemInvalid(line, keyword, `is already given on line ${earlier}`);
    if (value === '') throw oemInvalid(line, keyword, 'has no value');
    this.values.set(keyword, value);
    this.lines.set(keyword, line);
  }

  get(keyword: string): string | undefined {
    return this.values.get(keyword);
  }

  lineOf(keyword: string): number {
    return this.lines.get(keyword) ?? 0;
  }

  requireAll(keywords: readonly string[], line: number): void {
    for (const keyword of keywords) {
      if (!this.values.has(keyword))
        throw oemInvalid(line, keyword, `is missing in the ${this.blockName} that ends here`);
    }
  }

  epoch(keyword: string, scale: TimeScale): number {
    try {
      return parseEpoch(this.values.get(keyword)!, scale);
    } catch (cause) {
      if (!(cause instanceof AppError)) throw cause;
      const line = this.lineOf(keyword);
      throw new AppError(cause.code, `Line ${line}, ${keyword}: ${cause.message}`, [
        { line, field: keyword, detail: cause.message },
      ]);
    }
  }
}

export interface OemHeader {
  readonly version: string;
  readonly creationDate: string;
  readonly originator: string;
  readonly messageId: string;
  readonly classification: string;
  readonly comments: readonly string[];
}

/** Collects the header of a message, from either notation. */
export class HeaderBuilder {
  readonly block = new KeywordBlock('header', [...HEADER_MANDATORY, ...HEADER_OPTIONAL]);
  private readonly version: string;

  constructor(version: string, line: number) {
    if (!VERSIONS.includes(version)) {
      throw oemInvalid(line, 'CCSDS_OEM_VERS', `must be one of ${VERSIONS.join(', ')}`, version.slice(0, 40));
    }
    this.version = version;
  }

  finish(line: number): OemHeader {
    this.block.requireAll(HEADER_MANDATORY, line);
    this.block.epoch('CREATION_DATE', 'UTC');
    return {
      version: this.version,
      creationDate: this.block.get('CREATION_DATE')!,
      originator: this.block.get('ORIGINATOR')!,
      messageId: this.block.get('MESSAGE_ID') ?? '',
      classification: this.block.get('CLASSIFICATION') ?? '',
      comments: this.block.comments.lines,
    };
  }
}

/** Collects one metadata block of a message, from either notation. */
export class MetadataBuilder {
  readonly block = new KeywordBlock('metadata block', [...MANDATORY, ...OPTIONAL]);

  /**
   * @param line - line on which the block ends
   * @param fileScale - time system of the earlier blocks; it must stay the same (CCSDS 502.0-B-3, 5.2.4.5)
   * @throws {AppError} OEM_INVALID, FRAME_REFUSED, TIME_SYSTEM_REFUSED, EPOCH_UNREADABLE, each naming the line
   */
  finish(line: number, fileScale: TimeScale | null): SegmentSpan {
    const { block } = this;
    block.requireAll(MANDATORY, line);
    const timeSystem = timeScaleOf(block.get('TIME_SYSTEM')!, block.lineOf('TIME_SYSTEM'));
    if (fileScale !== null && timeSystem !== fileScale) {
      throw oemInvalid(
        block.lineOf('TIME_SYSTEM'),
        'TIME_SYSTEM',
        `must stay ${fileScale} through the whole file (CCSDS 502.0-B-3, 5.2.4.5)`,
        timeSystem,
      );
    }
    const frame = frameOf(block.get('REF_FRAME')!, block.lineOf('REF_FRAME'));
    if (block.get('REF_FRAME_EPOCH') !== undefined) block.epoch('REF_FRAME_EPOCH', timeSystem);
    const startTdbS = block.epoch('START_TIME', timeSystem);
    const stopTdbS = block.epoch('STOP_TIME', timeSystem);
    if (!(stopTdbS > startTdbS))
      throw oemInvalid(block.lineOf('STOP_TIME'), 'STOP_TIME', 'must be later than START_TIME');
    const hasStart = block.get('USEABLE_START_TIME') !== undefined;
    const hasStop = block.get('USEABLE_STOP_TIME') !== undefined;
    const usableStartTdbS = hasStart ? block.epoch('USEABLE_START_TIME', timeSystem) : startTdbS;
    const usableStopTdbS = hasStop ? block.epoch('USEABLE_STOP_TIME', timeSystem) : stopTdbS;
    if (usableStartTdbS < startTdbS - SPAN_ROUNDING_S || usableStopTdbS > stopTdbS + SPAN_ROUNDING_S) {
      const keyword = usableStartTdbS < startTdbS - SPAN_ROUNDING_S ? 'USEABLE_START_TIME' : 'USEABLE_STOP_TIME';
      throw oemInvalid(block.lineOf(keyword), keyword, 'lies outside START_TIME to STOP_TIME');
    }
    if (!(usableStopTdbS > usableStartTdbS)) {
      const keyword = hasStop ? 'USEABLE_STOP_TIME' : 'USEABLE_START_TIME';
      throw oemInvalid(block.lineOf(keyword), keyword, 'leaves no usable span');
    }
    return {
      startTdbS,
      stopTdbS,
      metadata: {
        objectName: block.get('OBJECT_NAME')!,
        objectId: block.get('OBJECT_ID')!,
        centerName: block.get('CENTER_NAME')!,
        frameName: block.get('REF_FRAME')!,
        frame,
        timeSystem,
        ...this.interpolation(),
        usableStartTdbS,
        usableStopTdbS,
        comments: block.comments.lines,
        lines: block.lines,
      },
    };
  }

  private interpolation(): Pick<
    SegmentMetadata,
    'interpolation' | 'degree' | 'interpolationStated' | 'degreeRoundedFrom'
  > {
    const { block } = this;
    const method = block.get('INTERPOLATION');
    const degreeText = block.get('INTERPOLATION_DEGREE');
    if (method === undefined) {
      if (degreeText !== undefined) {
        throw oemInvalid(
          block.lineOf('INTERPOLATION_DEGREE'),
          'INTERPOLATION_DEGREE',
          'is given without INTERPOLATION',
        );
      }
      return { interpolation: 'hermite', degree: DEFAULT_DEGREE, interpolationStated: false, degreeRoundedFrom: null };
    }
    const kind = (['hermite', 'lagrange', 'linear'] as const satisfies readonly InterpolationKind[]).find(
      (candidate) => candidate.toUpperCase() === plainName(method),
    );
    if (kind === undefined) {
      throw oemInvalid(block.lineOf('INTERPOLATION'), 'INTERPOLATION', 'must be HERMITE, LAGRANGE or LINEAR', method);
    }
    if (degreeText === undefined) {
      throw oemInvalid(block.lineOf('INTERPOLATION'), 'INTERPOLATION', 'needs an INTERPOLATION_DEGREE beside it');
    }
    const degree = /^\d{1,3}$/.test(degreeText) ? Number(degreeText) : Number.NaN;
    if (!(degree >= 1 && degree <= MAX_DEGREE)) {
      throw oemInvalid(
        block.lineOf('INTERPOLATION_DEGREE'),
        'INTERPOLATION_DEGREE',
        `must be a whole number from 1 to ${MAX_DEGREE}`,
        degreeText,
      );
    }
    if (kind === 'linear' && degree !== 1) {
      throw oemInvalid(block.lineOf('INTERPOLATION_DEGREE'), 'INTERPOLATION_DEGREE', 'is 1 for LINEAR', degreeText);
    }
    // A Hermite polynomial through states has an odd degree; an even one is rounded down and the reading says so.
    const even = kind === 'hermite' && degree % 2 === 0;
    return {
      interpolation: kind,
      degree: even ? degree - 1 : degree,
      interpolationStated: true,
      degreeRoundedFrom: even ? degree : null,
    };
  }
}

export interface SegmentSpan {
  /** START_TIME and STOP_TIME: they bracket all nodes. */
  readonly startTdbS: number;
  readonly stopTdbS: number;
  readonly metadata: SegmentMetadata;
}
