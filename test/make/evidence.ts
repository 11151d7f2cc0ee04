/** Writes db/reference/evidence/checks.json. Run: npx tsx test/make/evidence.ts */
import { writeFileSync } from 'node:fs';
import { evidenceRows } from './evidenceRows.ts';

const lines = evidenceRows().map((row) => `  ${JSON.stringify(row)}`);
writeFileSync(new URL('../../db/reference/evidence/checks.json', import.meta.url), `[\n${lines.join(',\n')}\n]\n`);
