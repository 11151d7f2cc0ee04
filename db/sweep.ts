import { readdirSync, statSync } from 'node:fs';
import type { Blobs } from './blobs.ts';
import type { Store } from './open.ts';

/** Results of jobs count only while what they were made for is still there. */
const OF_JOBS =
  "SELECT input, result FROM jobs WHERE kind <> 'assessment' OR subjectId IN (SELECT id FROM assessments)";

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
  const tables = store
    .prepare("SELECT name FROM sqlite_schema WHERE type = 'table' AND name <> 'jobs' AND name NOT LIKE 'sqlite_%'")
    .pluck()
    .all() as string[];
  // A row of any table, in any column, keeps what it names: a table added later cannot be forgotten here.
  for (const sql of [...tables.map((table) => `SELECT * FROM "${table}"`), OF_JOBS]) {
    for (const row of store.prepare(sql).raw().iterate() as IterableIterator<unknown[]>) {
      for (const value of row) {
        if (typeof value !== 'string') continue;
        for (const [sha256] of value.matchAll(/[0-9a-f]{64}/g)) named.add(sha256);
      }
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
