/** Parts lists as CSV: the way they arrive from a parts engineer, refused by row and column where they are wrong. */
import { CsvError, parse } from 'csv-parse/sync';
import { AppError, type ErrorPlace } from '../errors.ts';
import type { PartInput } from './input.ts';
import { CAPABILITY_BASES, partFaults } from './parts.ts';
import type { CapabilityBasis } from './result.ts';

/** Columns in the order they are written. The first three and a capability or failure doses are needed. */
export const PART_COLUMNS = [
  'partId',
  'name',
  'placeId',
  'description',
  'technology',
  'capabilityKradSi',
  'capabilityBasis',
  'sampleSize',
  'doseRateRadSiPerS',
  'failureDosesKradSi',
  'lotConfidence',
  'lotProbability',
  'requiredRdm',
] as const satisfies readonly (keyof PartInput)[];
type PartColumn = (typeof PART_COLUMNS)[number];

const NUMERIC: readonly PartColumn[] = [
  'capabilityKradSi',
  'sampleSize',
  'doseRateRadSiPerS',
  'lotConfidence',
  'lotProbability',
  'requiredRdm',
];
const NEEDED: readonly PartColumn[] = ['partId', 'name', 'placeId'];
/** A plain decimal number; `1,5`, `0x10` and `1e` are refused rather than guessed at. */
const NUMBER = /^[+-]?(\d+(\.\d*)?|\.\d+)([eE][+-]?\d+)?$/;

/**
 * Reads a parts list.
 *
 * Rows are counted as lines of the file, the header being line 1. Column names are matched exactly; an unknown or
 * repeated column is refused, empty cells mean "not given". Failure doses stand in one cell, separated by spaces or
 * semicolons.
 *
 * @param text - CSV (RFC 4180), with or without a byte-order mark
 * @throws {AppError} PARTS_CSV_INVALID with line and column of every fault
 */
export function parsePartsCsv(text: string): PartInput[] {
  const records = readRecords(text);
  const header = records[0]?.cells.map((cell) => cell.trim()) ?? [];
  const places = headerFaults(header);
  if (records.length < 2) places.push({ line: 1, detail: 'holds no part below the header line' });
  if (places.length > 0) refuse(places);

  const parts: PartInput[] = [];
  const seen = new Map<string, number>();
  for (const { line, cells } of records.slice(1)) {
    if (cells.length !== header.length) {
      places.push({ line, detail: `has ${cells.length} cells`, got: cells.length, limit: header.length });
      continue;
    }
    const { part, faults } = readRow(header as PartColumn[], cells, line);
    places.push(...faults);
    if (faults.length > 0) continue;
    places.push(...partFaults(part, (field) => ({ line, field })));
    const first = seen.get(part.partId);
    if (first !== undefined) {
      places.push({ line, field: 'partId', detail: `repeats the id of line ${first}`, got: part.partId });
    }
    seen.set(part.partId, first ?? line);
    parts.push(part);
  }
  if (places.length > 0) refuse(places);
  return parts;
}

/** Writes a parts list in the form that `parsePartsCsv` reads; cells that a spreadsheet would run are quoted as text. */
export function formatPartsCsv(parts: readonly PartInput[]): string {
  const rows = parts.map((part) =>
    PART_COLUMNS.map((column) => {
      const value = part[column];
      if (value === undefined) return '';
      return typeof value === 'number' ? String(value) : typeof value === 'string' ? cell(value) : value.join(' ');
    }).join(','),
  );
  return `${[PART_COLUMNS.join(','), ...rows].join('\r\n')}\r\n`;
}

function readRecords(text: string): { line: number; cells: string[] }[] {
  try {
    const rows = parse(text, {
      bom: true,
      info: true,
      relax_column_count: true,
      skip_empty_lines: true,
    }) as unknown as {
      info: { lines: number };
      record: string[];
    }[];
    // `lines` counts the lines read once the record is complete; a record starts after the one before it.
    return rows.map(({ info, record }) => ({
      line: info.lines - record.reduce((sum, value) => sum + (value.match(/\n/g)?.length ?? 0), 0),
      cells: record,
    }));
  } catch (error) {
    if (!(error instanceof CsvError)) throw error;
    const line = typeof error.lines === 'number' ? error.lines : 1;
    throw new AppError(
      'PARTS_CSV_INVALID',
      `The parts table is not readable as CSV: line ${line}: ${error.message}.`,
      [{ line, detail: error.message }],
      { cause: error },
    );
  }
}

function headerFaults(header: readonly string[]): ErrorPlace[] {
  const faults: ErrorPlace[] = [];
  header.forEach((name, i) => {
    if (!(PART_COLUMNS as readonly string[]).includes(name)) {
      faults.push({ line: 1, field: name, detail: `is not a column; known are ${PART_COLUMNS.join(', ')}`, got: name });
    } else if (header.indexOf(name) !== i) {
      faults.push({ line: 1, field: name, detail: 'stands twice in the header', got: name });
    }
  });
  for (const name of NEEDED) {
    if (!header.includes(name)) faults.push({ line: 1, field: name, detail: 'is missing from the header' });
  }
  return faults;
}

function readRow(
  header: readonly PartColumn[],
  cells: readonly string[],
  line: number,
): { part: PartInput; faults: ErrorPlace[] } {
  const faults: ErrorPlace[] = [];
  const values: Record<string, unknown> = { partId: '', name: '', placeId: '' };
  header.forEach((column, i) => {
    const text = cells[i].trim();
    if (text === '') return;
    if (NUMERIC.includes(column)) {
      if (NUMBER.test(text)) values[column] = Number(text);
      else faults.push({ line, field: column, detail: 'is not a number', got: text });
    } else if (column === 'failureDosesKradSi') {
      const items = text.split(/[\s;]+/).filter((item) => item !== '');
      const bad = items.find((item) => !NUMBER.test(item));
      if (bad === undefined) values[column] = items.map(Number);
      else faults.push({ line, field: column, detail: 'holds something that is not a number', got: bad });
    } else if (column === 'capabilityBasis') {
      const basis = CAPABILITY_BASES.find((known) => plain(known) === plain(text));
      if (basis === undefined) {
        faults.push({ line, field: column, detail: `must be one of ${CAPABILITY_BASES.join(', ')}`, got: text });
      } else values[column] = basis satisfies CapabilityBasis;
    } else values[column] = text.replace(/^'(?=[=+\-@\t\r])/, '');
  });
  return { part: values as unknown as PartInput, faults };
}

/** `data sheet`, `Data-Sheet` and `dataSheet` are the same word. */
function plain(text: string): string {
  return text.toLowerCase().replace(/[\s_-]/g, '');
}

function cell(text: string): string {
  const safe = /^[=+\-@\t\r]/.test(text) ? `'${text}` : text;
  return /[",\r\n]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe;
}

function refuse(places: readonly ErrorPlace[]): never {
  const { line, field, detail, got } = places[0];
  const where = field === undefined ? `Line ${line}` : `Line ${line}, column ${field}`;
  const more = places.length > 1 ? ` (and ${places.length - 1} more)` : '';
  throw new AppError(
    'PARTS_CSV_INVALID',
    `${where}: ${detail}${got === undefined ? '' : `, got "${got}"`}${more}.`,
    places,
  );
}
