import { mkdirSync, readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import Database from 'better-sqlite3';

export type Store = Database.Database;

const MIGRATIONS = new URL('./migrations/', import.meta.url);

/**
 * Opens the database of a data directory, creating both, and brings it to the newest schema. Migrations are numbered
 * plain SQL; `user_version` counts those that have run.
 *
 * @throws {Error} when the file was written by a newer version of the service
 */
export function openStore(dataDir: string): Store {
  mkdirSync(join(dataDir, 'blobs'), { recursive: true });
  const store = new Database(join(dataDir, 'sidelong.sqlite'));
  store.pragma('journal_mode = WAL');
  store.pragma('foreign_keys = ON');
  const files = readdirSync(MIGRATIONS)
    .filter((name) => name.endsWith('.sql'))
    .sort();
  const done = store.pragma('user_version', { simple: true }) as number;
  if (done > files.length) {
    throw new Error(`The database in ${dataDir} is of schema ${done}; this version knows ${files.length}.`);
  }
  for (let i = done; i < files.length; i++) {
    const sql = readFileSync(new URL(files[i], MIGRATIONS), 'utf8');
    store.transaction(() => {
      store.exec(sql);
      store.pragma(`user_version = ${i + 1}`);
    })();
  }
  return store;
}
