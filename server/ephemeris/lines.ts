import { AppError, type ErrorCode } from '../errors.ts';
import { MAX_STATES } from './nodes.ts';
import type { ByteSource } from './source.ts';

const CHUNK_BYTES = 1 << 20;
/** Far above the 255 characters of CCSDS 502.0-B-3, 7.3.2; a longer line is no text ephemeris. */
const MAX_LINE_BYTES = 4096;
const NEWLINE = 10;
const RETURN = 13;

/**
 * Lines of a text source, one at a time and without a string for each: after `next()`, the line is
 * `bytes[start .. end)` without its terminator (LF or CRLF) and `number` counts from 1. A byte order mark is skipped.
 */
export class LineReader {
  bytes: Uint8Array = new Uint8Array(0);
  start = 0;
  end = 0;
  number = 0;
  private readonly source: ByteSource;
  private readonly code: ErrorCode;
  private readonly buffer = new Uint8Array(CHUNK_BYTES + MAX_LINE_BYTES + 2);
  private filled = 0;
  private position = 0;
  private sourceOffset = 0;

  /** @param code - the refusal thrown for a line that is too long */
  constructor(source: ByteSource, code: ErrorCode) {
    this.source = source;
    this.code = code;
    this.bytes = this.buffer;
    this.fill();
    const mark = this.buffer[0] === 0xef && this.buffer[1] === 0xbb && this.buffer[2] === 0xbf;
    if (mark && this.filled >= 3) this.position = 3;
  }

  /** Bytes of the source not yet handed out, for sizing tables ahead of the rows. */
  get remainingBytes(): number {
    return this.source.sizeBytes - this.sourceOffset + this.filled - this.position;
  }

  /** @returns false at the end of the source */
  next(): boolean {
    let found = this.indexOfNewline();
    if (found < 0 && this.sourceOffset < this.source.sizeBytes) {
      this.fill();
      found = this.indexOfNewline();
    }
    if (found < 0 && this.position >= this.filled) return false;
    this.number++;
    this.start = this.position;
    this.end = found < 0 ? this.filled : found;
    this.position = this.end + 1;
    if (this.end - this.start > MAX_LINE_BYTES) {
      throw new AppError(
        this.code,
        `Line ${this.number} is longer than ${MAX_LINE_BYTES} bytes; a text ephemeris has lines of at most 255.`,
        [{ line: this.number, detail: 'line too long', limit: MAX_LINE_BYTES, unit: 'bytes' }],
      );
    }
    if (this.end > this.start && this.bytes[this.end - 1] === RETURN) this.end--;
    return true;
  }

  /** The line as text, read as UTF-8; for keywords, comments and messages. */
  text(): string {
    return textOf(this.bytes, this.start, this.end);
  }

  private indexOfNewline(): number {
    const found = this.buffer.indexOf(NEWLINE, this.position);
    return found < this.filled ? found : -1;
  }

  /** Moves the unfinished line to the front and reads the next chunk behind it. */
  private fill(): void {
    const kept = this.filled - this.position;
    // A line that fills what is kept is already too long; next() refuses it.
    if (kept > MAX_LINE_BYTES) return;
    this.buffer.copyWithin(0, this.position, this.filled);
    const length = Math.min(CHUNK_BYTES, this.source.sizeBytes - this.sourceOffset);
    this.buffer.set(this.source.read(this.sourceOffset, length), kept);
    this.sourceOffset += length;
    this.position = 0;
    this.filled = kept + length;
  }
}

const decoder = new TextDecoder('utf-8');

export function textOf(bytes: Uint8Array, start: number, end: number): string {
  return decoder.decode(bytes.subarray(start, end));
}

/** Rows to expect when the rest of the source looks like the current line, bounded by what a file may hold. */
export function expectedRows(lines: LineReader): number {
  return Math.min(MAX_STATES, Math.ceil(lines.remainingBytes / (lines.end - lines.start + 1)) + 2);
}
