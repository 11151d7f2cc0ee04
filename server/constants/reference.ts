import { readFileSync } from 'node:fs';
import { sha256Hex } from '../canonical.ts';

/**
 * Reads the published tables that ship under db/reference/<dataset>/, each beside a SOURCE.md with its citation.
 * The only place where the physics touches the disk: once, at load, and only files of this repository.
 */
export interface ReferenceFile {
  readonly text: string;
  readonly sha256: string;
}

const ROOT = new URL('../../db/reference/', import.meta.url);

export function readReference(dataset: string, file: string): ReferenceFile {
  const text = readFileSync(new URL(`${dataset}/${file}`, ROOT), 'utf8');
  return { text, sha256: sha256Hex(text) };
}

/** The bytes of a binary table. */
export function readReferenceBytes(dataset: string, file: string): Uint8Array {
  return readFileSync(new URL(`${dataset}/${file}`, ROOT));
}

export function readReferenceJson<T>(dataset: string, file: string): T {
  return JSON.parse(readReference(dataset, file).text) as T;
}

/**
 * A numeric CSV: lines that begin with `#` are remarks, the first other line names the columns.
 *
 * @returns column name → shape (rows,) values
 * @throws {TypeError} when a cell is not a number: a damaged table of ours is a defect, not an input error
 */
export function readReferenceColumns(dataset: string, file: string): ReadonlyMap<string, Float64Array> {
  const lines = readReference(dataset, file)
    .text.split(/\r?\n/)
    .filter((line) => line !== '' && !line.startsWith('#'));
  const names = lines[0].split(',');
  const columns = names.map(() => new Float64Array(lines.length - 1));
  for (let row = 1; row < lines.length; row++) {
    const cells = lines[row].split(',');
    for (let column = 0; column < names.length; column++) {
      const value = Number(cells[column]);
      if (cells[column] === undefined || cells[column] === '' || Number.isNaN(value)) {
        throw new TypeError(
          `${dataset}/${file}: row ${row}, column ${names[column]} is not a number: ${cells[column]}`,
        );
      }
      columns[column][row - 1] = value;
    }
  }
  return new Map(names.map((name, index) => [name.trim(), columns[index]]));
}
