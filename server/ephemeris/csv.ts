import { parse } from 'csv-parse/sync';
import { AppError, type ErrorPlace } from '../errors.ts';
import { epochOfBytes, whyNoEpoch } from '../time/index.ts';
import { type CsvColumns, type CsvPlan, planColumns } from './csvColumns.ts';
import { decimalOfBytes } from './decimal.ts';
import { expectedRows, LineReader, textOf } from './lines.ts';
import { CommentList, MAX_STATES, type NodeEphemeris, NodeRows } from './nodes.ts';
import type { ByteSource } from './source.ts';

const QUOTE = 0x22;
const HASH = 0x23;
const J2000_JD = 2_451_545;
/** A thousand years: a count beyond it has another unit or origin. */
const MAX_EPOCH_S = 1000 * 365.25 * 86_400;
const J2000_MJD = 51_544.5;

/** What a CSV table cannot say itself. */
export interface CsvContext {
  readonly columns?: CsvColumns;
  /** Radius of the planet, for columns in planet radii; absent when the planet is not known. */
  readonly planetRadiusKm?: number;
}

/**
 * Table of states: remarks (`#`) and blank lines, one header line, then rows. Separator comma, semicolon or tab, as in
 * the header line. Hermite of degree 7 between the rows, since a table says nothing about it.
 *
 * @throws {AppError} CSV_INVALID naming line and column; EPOCH_UNREADABLE
 */
export function readCsv(source: ByteSource, context: CsvContext): NodeEphemeris {
  const lines = new LineReader(source, 'CSV_INVALID');
  const comments = new CommentList();
  if (!nextRow(lines, comments)) throw new AppError('CSV_INVALID', 'The table has no header line.');
  const headerLine = lines.number;
  const headerText = lines.text();
  const separator = separatorOf(headerText);
  const names = splitQuoted(headerText, separator, headerLine).map((name) => name.trim());
  const plan = planColumns(names, headerLine, context.columns, context.planetRadiusKm);
  const rows = readRows(lines, separator.charCodeAt(0), names, plan, comments);
  const epochs = rows.finish();
  const last = epochs.epochsTdbS.length - 1;
  return {
    format: 'csv',
    version: '',
    creationDate: '',
    originator: '',
    messageId: '',
    classification: '',
    comments: comments.lines,
    segments: [
      {
        ...epochs,
        metadata: {
          objectName: context.columns?.objectName ?? '',
          objectId: '',
          centerName: plan.centerName,
          frameName: plan.frameName,
          frame: plan.frame,
          timeSystem: plan.timeScale,
          interpolation: 'hermite',
          degree: 7,
          interpolationStated: false,
          degreeRoundedFrom: null,
          usableStartTdbS: epochs.epochsTdbS[0],
          usableStopTdbS: epochs.epochsTdbS[last],
          comments: [],
          lines: new Map([
            ['CENTER_NAME', headerLine],
            ['REF_FRAME', headerLine],
          ]),
        },
        accelerationCount: 0,
        covarianceCount: 0,
      },
    ],
  };
}

function readRows(
  lines: LineReader,
  separator: number,
  names: readonly string[],
  plan: CsvPlan,
  comments: CommentList,
): NodeRows {
  const rows = new NodeRows();
  const starts = new Int32Array(names.length + 1);
  const state = new Float64Array(6);
  while (nextRow(lines, comments)) {
    let { bytes, start, end } = lines;
    const line = lines.number;
    if (bytes.subarray(start, end).includes(QUOTE)) {
      // Quoted cells are rare in tables of numbers: such a line is rewritten without its quotes.
      const cells = splitQuoted(lines.text(), String.fromCharCode(separator), line);
      bytes = new TextEncoder().encode(
        cells.map((cell) => cell.replaceAll(String.fromCharCode(separator), ' ')).join(String.fromCharCode(separator)),
      );
      start = 0;
      end = bytes.length;
    }
    const count = cellStarts(bytes, start, end, separator, starts);
    if (count !== names.length) {
      throw csvInvalid(line, '', `has ${count} cells, the header line names ${names.length} columns`);
    }
    const epochTdbS = epochOf(bytes, starts, plan, line);
    if (!(epochTdbS > rows.lastEpochTdbS)) {
      const what = epochTdbS === rows.lastEpochTdbS ? 'repeats the epoch of' : 'is earlier than';
      throw csvInvalid(line, names[plan.epochIndex], `${what} the row before it; epochs must ascend`);
    }
    for (let i = 0; i < 6; i++) {
      const index = plan.stateIndices[i];
      const value = cellNumber(bytes, starts, index);
      if (Number.isNaN(value)) {
        const got = cellText(bytes, starts, index);
        throw csvInvalid(line, names[index], 'is no finite number', got);
      }
      state[i] = value * plan.stateFactors[i];
    }
    if (rows.count === 0) rows.expect(expectedRows(lines));
    if (rows.count >= MAX_STATES)
      throw csvInvalid(line, '', `the table holds more than ${MAX_STATES} rows; thin it out`);
    rows.push(epochTdbS, state);
  }
  if (rows.count < 2) {
    throw csvInvalid(lines.number, '', `the table ends here with ${rows.count} rows of states; at least 2 are needed`);
  }
  return rows;
}

function epochOf(bytes: Uint8Array, starts: Int32Array, plan: CsvPlan, line: number): number {
  const { epochIndex } = plan;
  if (plan.epochFormat === 'iso') {
    const [from, to] = cellBounds(bytes, starts, epochIndex);
    const epochTdbS = epochOfBytes(bytes, from, to, plan.timeScale);
    if (Number.isNaN(epochTdbS)) {
      const detail = whyNoEpoch(textOf(bytes, from, to), plan.timeScale);
      throw new AppError('EPOCH_UNREADABLE', `Line ${line}: ${detail}`, [{ line, field: 'epoch', detail }]);
    }
    return epochTdbS;
  }
  const value = cellNumber(bytes, starts, epochIndex);
  if (Number.isNaN(value)) throw csvInvalid(line, 'epoch', 'is no finite number', cellText(bytes, starts, epochIndex));
  const epochTdbS =
    plan.epochFormat === 'secondsPastJ2000'
      ? value
      : 86_400 * (value - (plan.epochFormat === 'julianDate' ? J2000_JD : J2000_MJD));
  if (Math.abs(epochTdbS) > MAX_EPOCH_S) {
    throw csvInvalid(line, 'epoch', 'lies more than a thousand years from 2000', cellText(bytes, starts, epochIndex));
  }
  return epochTdbS;
}

/** Advances to the next line that is neither blank nor a remark; remarks go to `comments`. */
function nextRow(lines: LineReader, comments: CommentList): boolean {
  while (lines.next()) {
    let at = lines.start;
    while (at < lines.end && lines.bytes[at] <= 0x20) at++;
    if (at === lines.end) continue;
    if (lines.bytes[at] !== HASH) return true;
    comments.add(textOf(lines.bytes, at + 1, lines.end).trim());
  }
  return false;
}

function separatorOf(header: string): string {
  const counts = [',', ';', '\t'].map((candidate) => header.split(candidate).length - 1);
  const most = Math.max(...counts);
  if (most < 6) {
    throw new AppError(
      'CSV_INVALID',
      'The header line must name at least 7 columns (epoch, three positions, three velocities), separated by commas, semicolons or tabs.',
    );
  }
  return [',', ';', '\t'][counts.indexOf(most)];
}

function splitQuoted(text: string, delimiter: string, line: number): string[] {
  try {
    const records: string[][] = parse(text, { delimiter, relax_column_count: true });
    return records[0] ?? [];
  } catch (cause) {
    throw csvInvalid(line, '', `quotes do not close: ${(cause as Error).message}`);
  }
}

/** Where each cell starts; the entry behind the last one is the end of the line plus one. */
function cellStarts(bytes: Uint8Array, start: number, end: number, separator: number, out: Int32Array): number {
  const room = out.length - 1;
  let count = 0;
  out[0] = start;
  for (let i = start; i < end; i++) {
    if (bytes[i] === separator) {
      count++;
      if (count <= room) out[count] = i + 1;
    }
  }
  count++;
  if (count <= room) out[count] = end + 1;
  return count;
}

function cellBounds(bytes: Uint8Array, starts: Int32Array, index: number): [number, number] {
  let from = starts[index];
  let to = starts[index + 1] - 1;
  while (from < to && bytes[from] <= 0x20) from++;
  while (to > from && bytes[to - 1] <= 0x20) to--;
  return [from, to];
}

function cellNumber(bytes: Uint8Array, starts: Int32Array, index: number): number {
  const [from, to] = cellBounds(bytes, starts, index);
  return decimalOfBytes(bytes, from, to);
}

function cellText(bytes: Uint8Array, starts: Int32Array, index: number): string {
  const [from, to] = cellBounds(bytes, starts, index);
  return textOf(bytes, from, Math.min(to, from + 40));
}

function csvInvalid(line: number, field: string, detail: string, got?: string): AppError {
  const place: ErrorPlace = {
    line,
    detail,
    ...(field === '' ? {} : { field }),
    ...(got === undefined ? {} : { got }),
  };
  const column = field === '' ? '' : `, column ${field}`;
  return new AppError('CSV_INVALID', `Line ${line}${column}: ${detail}${got === undefined ? '' : `, got "${got}"`}.`, [
    place,
  ]);
}
