/** Source: each row names its own; this holds the committed annex to what the rooms give today. */
import { readFileSync } from 'node:fs';
import { expect, it } from 'vitest';
import { evidenceRows } from '../make/evidenceRows.ts';

it('the evidence annex is fresh', () => {
  const committed = JSON.parse(
    readFileSync(new URL('../../db/reference/evidence/checks.json', import.meta.url), 'utf8'),
  ) as unknown;
  expect(committed).toEqual(evidenceRows());
});
