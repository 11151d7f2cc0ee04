import { readdirSync, statSync } from 'node:fs';
import type { Blobs } from './blobs.ts';
import type { Store } from './open.ts';

/** Every column that may name a blob. Results of jobs count only while what they were made for is still there. */
const REFERENCES = [
  'SELECT blobSha256 AS text FROM trajectories',
  'SELECT blobSha256 AS text FROM artefacts',
  'SELECT body AS text FROM assessments',
  'SELECT body AS text FROM reports',
  "SELECT input || coalesce(result, '') AS text FROM jobs WHERE kind <> 'assessment' OR subjectId IN (SELECT id FROM assessments)",
] as const;

/** A blob just written may belong to a row that is about to be. */
const YOUNG_MS = 60_000;

/**
 * Removes the files in the blob folder that no row names: of deleted items, and what an interrupted write left behind.
 * To be called at start, before anything is written.
 *
 * @returns how many files went, and their bytes
 */
export function sweepBlobs(store: Store, blobs: Blobs, now = Date.now()): { removed: number; bytes: number } {
  const named = new Set<string>();
  for (const sql of REFERENCES) {
    for (const row of store.prepare(sql).iterate() as IterableIterator<{ text: string }>) {
      for (const [sha256] of row.text.matchAll(/[0-9a-f]{64}/g)) named.add(sha256);
    }
  }
  let removed = 0;
  let bytes = 0;
  for (const name of readdirSync(blobs.directory)) {
    if (named.has(name)) continue;
    const { size, mtimeMs } = statSync(blobs.path(name));
    if (now - mtimeMs < YOUNG_MS) continue;
    blobs.remove(name);
    removed += 1;
    bytes += size;
  }
  return { removed, bytes };
}
