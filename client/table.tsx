import type { ComponentChildren } from 'preact';
import { useState } from 'preact/hooks';

/** One column: what a row says in it, unrounded for the file, and how it shows. */
export interface Column<R> {
  /** With its unit. */
  readonly header: string;
  readonly value: (row: R) => string | number | null | undefined;
  /** Default: the value as text. */
  readonly cell?: (row: R) => ComponentChildren;
  /** Aligned right and sorted as numbers. */
  readonly numeric?: boolean;
}

const PAGE_ROWS = 100;

/**
 * The one table of the client: sorts by any column, copies itself as tab-separated text and saves itself as CSV with the
 * numbers unrounded, and shows long lists a hundred rows at a time.
 *
 * @param name - of the file, and what a screen reader calls the table
 */
export function DataTable<R>({
  name,
  columns,
  rows,
  keyOf,
  selected,
}: {
  name: string;
  columns: readonly Column<R>[];
  rows: readonly R[];
  keyOf: (row: R) => string;
  selected?: string | null;
}) {
  const [sort, setSort] = useState<{ column: number; descending: boolean } | null>(null);
  const [shown, setShown] = useState(PAGE_ROWS);
  const [said, setSaid] = useState('');
  const sorted = sort === null ? rows : [...rows].sort(comparator(columns[sort.column], sort.descending));
  const sortBy = (column: number) =>
    setSort((old) =>
      old?.column !== column ? { column, descending: false } : old.descending ? null : { column, descending: true },
    );
  const lines = (separator: string, quote: (text: string) => string) =>
    [
      columns.map(({ header }) => quote(header)).join(separator),
      ...sorted.map((row) =>
        columns
          .map(({ value }) => value(row))
          .map((entry) => (typeof entry === 'number' ? String(entry) : quote(safe(entry ?? ''))))
          .join(separator),
      ),
    ].join('\r\n');
  const copy = () =>
    navigator.clipboard.writeText(lines('\t', (text) => text.replaceAll(/[\t\r\n]+/g, ' '))).then(
      () => setSaid(`${sorted.length} rows copied.`),
      () => setSaid('The browser does not allow copying here; use CSV.'),
    );
  const save = () => {
    const link = document.createElement('a');
    link.href = URL.createObjectURL(new Blob([`${lines(',', csvQuoted)}\r\n`], { type: 'text/csv' }));
    link.download = `${name}.csv`;
    link.click();
    URL.revokeObjectURL(link.href);
  };
  return (
    <div class="data-table">
      <table aria-label={name}>
        <thead>
          <tr>
            {columns.map(({ header, numeric }, index) => {
              const active = sort?.column === index;
              const order = active ? (sort.descending ? 'descending' : 'ascending') : 'none';
              return (
                <th key={header} class={numeric ? 'num' : undefined} aria-sort={order}>
                  <button type="button" class="sort" onClick={() => sortBy(index)}>
                    {header}
                    <span aria-hidden="true">{active ? (sort.descending ? ' ▼' : ' ▲') : ''}</span>
                  </button>
                </th>
              );
            })}
          </tr>
        </thead>
        <tbody>
          {sorted.slice(0, shown).map((row) => (
            <tr key={keyOf(row)} class={selected === keyOf(row) ? 'chosen' : undefined}>
              {columns.map(({ header, numeric, value, cell }) => (
                <td key={header} class={numeric ? 'num' : undefined}>
                  {cell === undefined ? (value(row) ?? '–') : cell(row)}
                </td>
              ))}
            </tr>
          ))}
        </tbody>
      </table>
      <p class="small table-tools">
        {sorted.length > shown && (
          <>
            {shown} of {sorted.length} rows{' '}
            <button type="button" class="plain" onClick={() => setShown(shown + PAGE_ROWS)}>
              More
            </button>{' '}
          </>
        )}
        <button type="button" class="plain" onClick={copy}>
          Copy
        </button>{' '}
        <button type="button" class="plain" onClick={save}>
          CSV
        </button>{' '}
        <span aria-live="polite">{said}</span>
      </p>
    </div>
  );
}

function comparator<R>({ value, numeric }: Column<R>, descending: boolean): (a: R, b: R) => number {
  const sign = descending ? -1 : 1;
  return (a, b) => {
    const [x, y] = [value(a), value(b)];
    // What is not known comes last, whichever way the rest is sorted.
    if (x === null || x === undefined || y === null || y === undefined) {
      return Number(x === null || x === undefined) - Number(y === null || y === undefined);
    }
    if (numeric && typeof x === 'number' && typeof y === 'number') return sign * (x - y);
    return sign * String(x).localeCompare(String(y), 'en', { numeric: true });
  };
}

/** A leading sign that a spreadsheet would take for a formula is made harmless. */
function safe(text: string): string {
  return /^[=+\-@\t\r]/.test(text) ? `'${text}` : text;
}

function csvQuoted(text: string): string {
  return /[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text;
}
