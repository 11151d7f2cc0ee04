/** Runs every *.bench.ts beside it: `npm run bench`, or `npm run bench -- field` for one. Prints machine and versions. */
import { readdirSync } from 'node:fs';
import { cpus } from 'node:os';

export interface BenchRow {
  readonly name: string;
  readonly value: number;
  readonly unit: string;
  readonly rival?: { readonly name: string; readonly value: number };
  readonly limit?: string;
}

const only = process.argv[2];
console.log(
  `${new Date().toISOString().slice(0, 10)} · Node ${process.version} · ${process.arch} · ${cpus().length} × ${cpus()[0].model}`,
);
for (const file of readdirSync(new URL('.', import.meta.url)).sort()) {
  if (!file.endsWith('.bench.ts') || (only !== undefined && !file.startsWith(only))) continue;
  const { default: bench } = (await import(new URL(file, import.meta.url).href)) as {
    default: (report: (row: BenchRow) => void) => Promise<void>;
  };
  await bench((row) => {
    const rival = row.rival === undefined ? '' : `  (${row.rival.name}: ${row.rival.value.toPrecision(3)} ${row.unit})`;
    console.log(
      `${row.name.padEnd(52)} ${row.value.toPrecision(3).padStart(10)} ${row.unit}${rival}${row.limit === undefined ? '' : `  limit ${row.limit}`}`,
    );
  });
}
