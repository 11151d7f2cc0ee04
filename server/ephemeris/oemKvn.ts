import { AppError } from '../errors.ts';
import { epochOfBytes, type TimeScale, whyNoEpoch } from '../time/index.ts';
import { decimalOfBytes } from './decimal.ts';
import { expectedRows, LineReader, textOf } from './lines.ts';
import { HeaderBuilder, MetadataBuilder, type OemHeader, oemInvalid } from './metadata.ts';
import type { NodeEphemeris, NodeSegment } from './nodes.ts';
import { SegmentRows } from './segmentRows.ts';
import type { ByteSource } from './source.ts';

const MAX_SEGMENTS = 10_000;
const KEYWORD_LINE = /^([A-Z][A-Z0-9_]*)\s*=(.*)$/;

type Section = 'version' | 'header' | 'metadata' | 'states' | 'covariance' | 'afterCovariance';

/**
 * Orbit ephemeris message in keyword = value notation, versions 1.0 to 3.0 (CCSDS 502.0-B-3, sections 5 and 7), read
 * line by line without holding the text. Covariances and accelerations are checked and not kept.
 *
 * @throws {AppError} OEM_INVALID, EPOCH_UNREADABLE, TIME_SYSTEM_REFUSED or FRAME_REFUSED, each naming the line
 */
export function readOemKvn(source: ByteSource): NodeEphemeris {
  return new KvnReader(source).read();
}

class KvnReader {
  private readonly lines: LineReader;
  private section: Section = 'version';
  private headerBuilder: HeaderBuilder | null = null;
  private header: OemHeader | null = null;
  private metadata: MetadataBuilder | null = null;
  private rows: SegmentRows | null = null;
  private scale: TimeScale | null = null;
  private readonly segments: NodeSegment[] = [];
  private readonly state = new Float64Array(9);
  private covarianceRow = 6;

  constructor(source: ByteSource) {
    this.lines = new LineReader(source, 'OEM_INVALID');
  }

  read(): NodeEphemeris {
    const { lines } = this;
    while (lines.next()) {
      let { start, end } = lines;
      const { bytes } = lines;
      while (start < end && isBlank(bytes[start])) start++;
      while (end > start && isBlank(bytes[end - 1])) end--;
      if (start === end) continue;
      const digit = bytes[start] - 0x30;
      if (this.section === 'states' && digit >= 0 && digit <= 9) this.stateLine(bytes, start, end);
      else if (this.section === 'covariance' && !isCapital(bytes[start])) this.covarianceLine(bytes, start, end);
      else this.wordLine(textOf(bytes, start, end));
    }
    if (this.section === 'version' || this.section === 'header') {
      throw oemInvalid(lines.number, '', 'the file ends before its first META_START');
    }
    if (this.section === 'metadata')
      throw oemInvalid(lines.number, 'META_STOP', 'is missing; the file ends inside a metadata block');
    if (this.section === 'covariance') {
      throw oemInvalid(lines.number, 'COVARIANCE_STOP', 'is missing; the file ends inside a covariance block');
    }
    this.finishSegment();
    return { format: 'oem-kvn', ...this.header!, segments: this.segments };
  }

  /** Epoch and six or nine numbers, separated by blanks. */
  private stateLine(bytes: Uint8Array, start: number, end: number): void {
    const { state, lines } = this;
    const rows = this.rows!;
    const epochEnd = tokenEnd(bytes, start, end);
    const epochTdbS = epochOfBytes(bytes, start, epochEnd, this.scale!);
    if (Number.isNaN(epochTdbS)) throw this.badEpoch(textOf(bytes, start, epochEnd));
    let count = 0;
    let at = skipBlanks(bytes, epochEnd, end);
    while (at < end) {
      const stop = tokenEnd(bytes, at, end);
      const value = decimalOfBytes(bytes, at, stop);
      if (Number.isNaN(value)) {
        throw oemInvalid(
          lines.number,
          `column ${count + 2}`,
          'is no finite number',
          textOf(bytes, at, stop).slice(0, 40),
        );
      }
      if (count < 9) state[count] = value;
      count++;
      at = skipBlanks(bytes, stop, end);
    }
    if (count !== 6 && count !== 9) {
      throw oemInvalid(
        lines.number,
        '',
        `a state has an epoch and 6 numbers, or 9 with accelerations; this line has ${count} numbers`,
      );
    }
    // The first line of a block tells how many more of its length may follow.
    if (rows.rows.count === 0) rows.rows.expect(expectedRows(lines));
    rows.push(epochTdbS, state, count, lines.number);
  }

  /** One of the six rows of a lower triangle: the k-th has k numbers. */
  private covarianceLine(bytes: Uint8Array, start: number, end: number): void {
    const { lines } = this;
    if (this.covarianceRow >= 6)
      throw oemInvalid(lines.number, 'EPOCH', 'must come before the rows of a covariance matrix');
    let count = 0;
    let at = start;
    while (at < end) {
      const stop = tokenEnd(bytes, at, end);
      if (Number.isNaN(decimalOfBytes(bytes, at, stop))) {
        throw oemInvalid(
          lines.number,
          `column ${count + 1}`,
          'is no finite number',
          textOf(bytes, at, stop).slice(0, 40),
        );
      }
      count++;
      at = skipBlanks(bytes, stop, end);
    }
    this.covarianceRow++;
    if (count !== this.covarianceRow) {
      throw oemInvalid(
        lines.number,
        '',
        `row ${this.covarianceRow} of a covariance matrix has ${this.covarianceRow} numbers, this line has ${count}`,
      );
    }
  }

  private wordLine(text: string): void {
    const line = this.lines.number;
    if (text === 'COMMENT' || /^COMMENT\s/.test(text)) {
      this.comment(text.slice(7).trim(), line);
      return;
    }
    if (/[^\x20-\x7e\t]/.test(text)) {
      throw oemInvalid(line, '', 'only printable ASCII characters may stand outside comments');
    }
    switch (text) {
      case 'META_START':
        this.startMetadata(line);
        return;
      case 'META_STOP':
        this.stopMetadata(line);
        return;
      case 'COVARIANCE_START':
        if (this.section !== 'states')
          throw oemInvalid(line, text, 'must follow the states of its block, once per block');
        this.section = 'covariance';
        this.covarianceRow = 6;
        return;
      case 'COVARIANCE_STOP':
        if (this.section !== 'covariance') throw oemInvalid(line, text, 'without COVARIANCE_START');
        this.endCovarianceMatrix(line);
        this.section = 'afterCovariance';
        return;
    }
    const match = KEYWORD_LINE.exec(text);
    if (match === null)
      throw oemInvalid(line, '', 'is neither KEYWORD = VALUE nor a state nor a comment', text.slice(0, 60));
    this.keyword(match[1], match[2].trim(), line);
  }

  private comment(text: string, line: number): void {
    if (this.section === 'version') throw oemInvalid(line, 'CCSDS_OEM_VERS', 'must be the first keyword of the file');
    if (this.section === 'header') this.headerBuilder!.block.comments.add(text);
    else if (this.section === 'metadata') this.metadata!.block.comments.add(text);
    else this.metadata?.block.comments.add(text);
  }

  private keyword(keyword: string, value: string, line: number): void {
    switch (this.section) {
      case 'version':
        if (keyword !== 'CCSDS_OEM_VERS')
          throw oemInvalid(line, keyword, 'CCSDS_OEM_VERS must be the first keyword of the file');
        this.headerBuilder = new HeaderBuilder(value, line);
        this.section = 'header';
        return;
      case 'header':
        this.headerBuilder!.block.set(keyword, value, line);
        return;
      case 'metadata':
        this.metadata!.block.set(keyword, value, line);
        return;
      case 'covariance':
        if (keyword === 'EPOCH') this.startCovarianceMatrix(value, line);
        else if (keyword !== 'COV_REF_FRAME' || this.covarianceRow !== 0) {
          throw oemInvalid(line, keyword, 'does not belong here in a covariance block');
        }
        return;
      default:
        throw oemInvalid(line, keyword, 'does not belong among the states of a block');
    }
  }

  private startMetadata(line: number): void {
    if (this.section === 'version') throw oemInvalid(line, 'CCSDS_OEM_VERS', 'must be the first keyword of the file');
    if (this.section === 'metadata')
      throw oemInvalid(line, 'META_START', 'inside a metadata block; META_STOP is missing');
    if (this.section === 'covariance')
      throw oemInvalid(line, 'META_START', 'inside a covariance block; COVARIANCE_STOP is missing');
    if (this.section === 'header') this.header = this.headerBuilder!.finish(line);
    else this.finishSegment();
    if (this.segments.length >= MAX_SEGMENTS) throw oemInvalid(line, 'META_START', `more than ${MAX_SEGMENTS} blocks`);
    this.metadata = new MetadataBuilder();
    this.section = 'metadata';
  }

  private stopMetadata(line: number): void {
    if (this.section !== 'metadata') throw oemInvalid(line, 'META_STOP', 'without META_START');
    const span = this.metadata!.finish(line, this.scale);
    const first = this.segments[0]?.metadata;
    if (first !== undefined && first.objectName !== span.metadata.objectName) {
      throw oemInvalid(
        span.metadata.lines.get('OBJECT_NAME') ?? line,
        'OBJECT_NAME',
        `a message is about one object; the first block names "${first.objectName}"`,
        span.metadata.objectName,
      );
    }
    this.scale = span.metadata.timeSystem;
    this.rows = new SegmentRows(span, this.segments);
    this.section = 'states';
  }

  private finishSegment(): void {
    this.segments.push(this.rows!.finish(this.lines.number));
    this.rows = null;
  }

  private startCovarianceMatrix(value: string, line: number): void {
    this.endCovarianceMatrix(line);
    const bytes = new TextEncoder().encode(value);
    const epochTdbS = epochOfBytes(bytes, 0, bytes.length, this.scale!);
    if (Number.isNaN(epochTdbS)) throw this.badEpoch(value);
    this.rows!.pushCovariance(epochTdbS, line);
    this.covarianceRow = 0;
  }

  private endCovarianceMatrix(line: number): void {
    if (this.covarianceRow !== 6) {
      throw oemInvalid(line, '', `a covariance matrix has 6 rows; the one before this line has ${this.covarianceRow}`);
    }
  }

  private badEpoch(text: string): AppError {
    const line = this.lines.number;
    const detail = whyNoEpoch(text, this.scale!);
    return new AppError('EPOCH_UNREADABLE', `Line ${line}: ${detail}`, [{ line, field: 'epoch', detail }]);
  }
}

function isBlank(byte: number): boolean {
  return byte === 0x20 || byte === 0x09;
}

function isCapital(byte: number): boolean {
  return byte >= 0x41 && byte <= 0x5a;
}

function skipBlanks(bytes: Uint8Array, at: number, end: number): number {
  while (at < end && isBlank(bytes[at])) at++;
  return at;
}

function tokenEnd(bytes: Uint8Array, at: number, end: number): number {
  while (at < end && !isBlank(bytes[at])) at++;
  return at;
}
