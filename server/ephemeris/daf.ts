import { AppError } from '../errors.ts';
import type { ByteSource } from './source.ts';

/**
 * Double-precision array file: the container of SPK kernels. 1024-byte records, 8-byte words, addresses of words
 * counted from 1.
 *
 * @source NAIF required reading on double precision array files (DAF) and on SPK
 */
const RECORD_BYTES = 1024;
const WORD_BYTES = 8;
const PAGE_WORDS = 8192;
/** 256 pages of 64 kB: what is kept of a kernel in memory, at most 16 MB. */
const MAX_PAGES = 256;
const MAX_SEGMENTS = 10_000;
const MAX_COMMENT_RECORDS = 500;
/** Some 30 000 years either way, wider than any ephemeris reaches. */
const MAX_EPOCH_S = 1e12;
const FTP_OFFSET = 699;
/** Every sequence that a transfer in text mode would change. */
const FTP_TEXT = 'FTPSTR:\r:\n:\r\n:\r\0:\x81:\x10\xce:ENDFTP';

export interface SpkSummary {
  readonly name: string;
  readonly startTdbS: number;
  readonly stopTdbS: number;
  readonly target: number;
  readonly center: number;
  readonly frame: number;
  readonly type: number;
  /** Addresses of the first and last word. */
  readonly first: number;
  readonly last: number;
}

export function spkInvalid(detail: string): AppError {
  return new AppError('SPK_INVALID', detail, [{ detail }]);
}

export class DafFile {
  readonly internalName: string;
  readonly littleEndian: boolean;
  readonly comments: readonly string[];
  readonly summaries: readonly SpkSummary[];
  private readonly source: ByteSource;
  private readonly wordCount: number;
  private readonly pages = new Map<number, Float64Array>();
  private lastPage = -1;
  private lastWords: Float64Array = new Float64Array(0);

  /** @throws {AppError} SPK_INVALID for damaged files */
  constructor(source: ByteSource) {
    this.source = source;
    if (source.sizeBytes < RECORD_BYTES) {
      throw spkInvalid(`The kernel has ${source.sizeBytes} bytes; its first record alone has ${RECORD_BYTES}.`);
    }
    const record = this.record(1);
    this.littleEndian = byteOrder(record);
    checkTransfer(latin1(record, 0, RECORD_BYTES));
    const integer = (offset: number): number => record.getInt32(offset, this.littleEndian);
    if (integer(8) !== 2 || integer(12) !== 6) {
      throw spkInvalid(
        `Segment summaries have ${integer(8)} doubles and ${integer(12)} integers; an SPK kernel has 2 and 6.`,
      );
    }
    this.internalName = latin1(record, 16, 60).trim();
    const forward = integer(76);
    const free = integer(84);
    this.wordCount = Math.floor(source.sizeBytes / WORD_BYTES);
    if (free - 1 > this.wordCount) {
      throw spkInvalid(
        `The kernel is truncated: it should hold ${(free - 1) * WORD_BYTES} bytes and has ${source.sizeBytes}.`,
      );
    }
    if (forward < 2 || forward > Math.ceil(source.sizeBytes / RECORD_BYTES)) {
      throw spkInvalid(`The first summary record, ${forward}, lies outside the file.`);
    }
    this.comments = this.readComments(forward);
    this.summaries = this.readSummaries(forward);
  }

  /** One word. */
  word(address: number): number {
    const page = Math.floor((address - 1) / PAGE_WORDS);
    if (page !== this.lastPage) this.loadPage(page);
    return this.lastWords[address - 1 - page * PAGE_WORDS];
  }

  /** Consecutive words into `out` from `offset`. */
  wordsInto(address: number, count: number, out: Float64Array, offset: number): void {
    let at = address - 1;
    let left = count;
    while (left > 0) {
      const page = Math.floor(at / PAGE_WORDS);
      if (page !== this.lastPage) this.loadPage(page);
      const start = at - page * PAGE_WORDS;
      const taken = Math.min(left, PAGE_WORDS - start);
      const words = this.lastWords;
      for (let i = 0; i < taken; i++) out[offset + i] = words[start + i];
      offset += taken;
      at += taken;
      left -= taken;
    }
  }

  private loadPage(page: number): void {
    let words = this.pages.get(page);
    if (words === undefined) {
      const count = Math.min(PAGE_WORDS, this.wordCount - page * PAGE_WORDS);
      const bytes = this.source.read(page * PAGE_WORDS * WORD_BYTES, count * WORD_BYTES);
      const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
      words = new Float64Array(count);
      for (let i = 0; i < count; i++) words[i] = view.getFloat64(i * WORD_BYTES, this.littleEndian);
      if (this.pages.size >= MAX_PAGES) this.pages.delete(this.pages.keys().next().value!);
      this.pages.set(page, words);
    }
    this.lastPage = page;
    this.lastWords = words;
  }

  /** A record as bytes; the last one of a file may be short and is filled with zeros. */
  private record(number: number): DataView {
    const offset = (number - 1) * RECORD_BYTES;
    const length = Math.min(RECORD_BYTES, this.source.sizeBytes - offset);
    const bytes = new Uint8Array(RECORD_BYTES);
    bytes.set(this.source.read(offset, length));
    return new DataView(bytes.buffer);
  }

  /** Text between the first record and the summaries: 1000 characters a record, NUL ends a line, EOT the text. */
  private readComments(forward: number): string[] {
    let text = '';
    for (let number = 2; number < Math.min(forward, MAX_COMMENT_RECORDS + 2); number++) {
      text += latin1(this.record(number), 0, 1000);
      const stop = text.indexOf('\x04');
      if (stop >= 0) {
        text = text.slice(0, stop);
        break;
      }
    }
    const lines = text
      .split('\0')
      .map((line) => line.replace(/[^\x20-\x7e]/g, ' ').trimEnd())
      .join('\n')
      .trim();
    return lines === '' ? [] : lines.split('\n');
  }

  private readSummaries(forward: number): SpkSummary[] {
    const summaries: SpkSummary[] = [];
    const visited = new Set<number>();
    const recordCount = Math.ceil(this.source.sizeBytes / RECORD_BYTES);
    let number = forward;
    while (number !== 0) {
      if (!Number.isInteger(number) || number < 2 || number > recordCount) {
        throw spkInvalid(`Summary record ${number} lies outside the file, which has ${recordCount} records.`);
      }
      if (visited.has(number)) throw spkInvalid(`The chain of summary records runs in a circle at record ${number}.`);
      visited.add(number);
      const record = this.record(number);
      const names = number < recordCount ? this.record(number + 1) : null;
      const count = record.getFloat64(16, this.littleEndian);
      if (!(count >= 0 && count <= 25)) throw spkInvalid(`Summary record ${number} claims ${count} segments; 25 fit.`);
      for (let i = 0; i < count; i++) {
        summaries.push(this.summary(record, 24 + 40 * i, names === null ? '' : latin1(names, 40 * i, 40).trim()));
      }
      if (summaries.length > MAX_SEGMENTS) throw spkInvalid(`The kernel has more than ${MAX_SEGMENTS} segments.`);
      number = record.getFloat64(0, this.littleEndian);
    }
    return summaries;
  }

  private summary(record: DataView, at: number, name: string): SpkSummary {
    const integer = (index: number): number => record.getInt32(at + 16 + 4 * index, this.littleEndian);
    const summary: SpkSummary = {
      name,
      startTdbS: record.getFloat64(at, this.littleEndian),
      stopTdbS: record.getFloat64(at + 8, this.littleEndian),
      target: integer(0),
      center: integer(1),
      frame: integer(2),
      type: integer(3),
      first: integer(4),
      last: integer(5),
    };
    if (
      !(
        Math.abs(summary.startTdbS) < MAX_EPOCH_S &&
        Math.abs(summary.stopTdbS) < MAX_EPOCH_S &&
        summary.stopTdbS >= summary.startTdbS
      )
    ) {
      throw spkInvalid(`Segment "${name}" of body ${summary.target} has no valid interval of time.`);
    }
    if (summary.first < 129 || summary.last < summary.first || summary.last > this.wordCount) {
      throw spkInvalid(
        `Segment "${name}" of body ${summary.target} occupies words ${summary.first} to ${summary.last}; the file has ${this.wordCount}: it is truncated or damaged.`,
      );
    }
    return summary;
  }
}

/** Byte order as declared, or, in files older than the declaration, as the count of doubles per summary tells. */
function byteOrder(record: DataView): boolean {
  const declared = latin1(record, 88, 8);
  if (declared === 'LTL-IEEE') return true;
  if (declared === 'BIG-IEEE') return false;
  if (latin1(record, 0, 8) === 'NAIF/DAF') {
    if (record.getInt32(8, true) === 2) return true;
    if (record.getInt32(8, false) === 2) return false;
  }
  throw spkInvalid(`The number format "${declared.replace(/[^\x20-\x7e]/g, '?')}" is not LTL-IEEE or BIG-IEEE.`);
}

function checkTransfer(record: string): void {
  if (record.startsWith(FTP_TEXT, FTP_OFFSET)) return;
  // Kernels older than the check carry no such string at all.
  if (!/FTPSTR|ENDFTP/.test(record)) return;
  throw spkInvalid(
    'The kernel was changed by a transfer in text mode (its check string is damaged); transfer it in binary mode.',
  );
}

function latin1(view: DataView, start: number, length: number): string {
  let text = '';
  for (let i = start; i < start + length; i++) text += String.fromCharCode(view.getUint8(i));
  return text;
}
