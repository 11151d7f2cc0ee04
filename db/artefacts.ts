import { createHash } from 'node:crypto';
import { createReadStream, existsSync, renameSync } from 'node:fs';
import { readFile } from 'node:fs/promises';
import { deserialize, serialize } from 'node:v8';
import type { Blobs } from './blobs.ts';
import type { Store } from './open.ts';

/** Computed things, kept under the hash of their inputs: nothing is computed twice. Typed arrays survive as they are. */
export class Artefacts {
  private readonly store: Store;
  private readonly blobs: Blobs;

  constructor(store: Store, blobs: Blobs) {
    this.store = store;
    this.blobs = blobs;
  }

  /** Path of the stored value, or null when it was never computed or its blob is gone. */
  path(key: string): string | null {
    const row = this.store.prepare('SELECT blobSha256 FROM artefacts WHERE key = ?').get(key) as
      | { blobSha256: string }
      | undefined;
    if (row === undefined) return null;
    const path = this.blobs.path(row.blobSha256);
    return existsSync(path) ? path : null;
  }

  async get<T>(key: string): Promise<T | null> {
    const path = this.path(key);
    return path === null ? null : (deserialize(await readFile(path)) as T);
  }

  /** Takes over a file that a worker wrote in the blob directory. @returns its final path */
  async adopt(key: string, kind: string, temporaryPath: string): Promise<string> {
    const hash = createHash('sha256');
    for await (const chunk of createReadStream(temporaryPath)) hash.update(chunk);
    const sha256 = hash.digest('hex');
    renameSync(temporaryPath, this.blobs.path(sha256));
    this.remember(key, kind, sha256);
    return this.blobs.path(sha256);
  }

  put(key: string, kind: string, value: unknown): string {
    const sha256 = this.blobs.put(serialize(value));
    this.remember(key, kind, sha256);
    return this.blobs.path(sha256);
  }

  private remember(key: string, kind: string, sha256: string): void {
    this.store
      .prepare(
        'INSERT INTO artefacts (key, kind, blobSha256) VALUES (?, ?, ?) ON CONFLICT (key) DO UPDATE SET blobSha256 = excluded.blobSha256',
      )
      .run(key, kind, sha256);
  }
}
