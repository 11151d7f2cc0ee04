import { createHash, randomUUID } from 'node:crypto';
import { closeSync, fstatSync, fsyncSync, mkdirSync, openSync, readSync, renameSync, rmSync, writeSync } from 'node:fs';
import { open } from 'node:fs/promises';
import { join } from 'node:path';
import type { Readable } from 'node:stream';

/** Originals and large arrays: files named by their content, written beside, synced, then renamed: never half there. */
export class Blobs {
  readonly directory: string;

  constructor(dataDir: string) {
    this.directory = join(dataDir, 'blobs');
    mkdirSync(this.directory, { recursive: true });
  }

  path(sha256: string): string {
    return join(this.directory, sha256);
  }

  /** Stores bytes at once. @returns their SHA-256 */
  put(bytes: Uint8Array): string {
    const sha256 = createHash('sha256').update(bytes).digest('hex');
    const temporary = join(this.directory, `.new-${randomUUID()}`);
    const file = openSync(temporary, 'wx');
    try {
      writeSync(file, bytes);
      fsyncSync(file);
    } finally {
      closeSync(file);
    }
    renameSync(temporary, this.path(sha256));
    return sha256;
  }

  /**
   * Stores a stream without holding it in memory.
   *
   * @param limitBytes - the stream is given up beyond it and nothing stays
   * @returns SHA-256 and size, or null when the limit was passed
   */
  async putStream(stream: Readable, limitBytes: number): Promise<{ sha256: string; sizeBytes: number } | null> {
    const temporary = join(this.directory, `.new-${randomUUID()}`);
    const file = await open(temporary, 'wx');
    const hash = createHash('sha256');
    let sizeBytes = 0;
    let kept = false;
    try {
      for await (const chunk of stream) {
        sizeBytes += chunk.length;
        if (sizeBytes > limitBytes) return null;
        hash.update(chunk);
        await file.write(chunk);
      }
      await file.sync();
      kept = true;
    } finally {
      await file.close();
      if (!kept) rmSync(temporary, { force: true });
    }
    const sha256 = hash.digest('hex');
    renameSync(temporary, this.path(sha256));
    return { sha256, sizeBytes };
  }

  remove(sha256: string): void {
    rmSync(this.path(sha256), { force: true });
  }
}

/** Random access to a file for the ephemeris readers. Call `close` when done. */
export function fileSource(path: string): {
  readonly sizeBytes: number;
  read(offset: number, length: number): Uint8Array;
  close(): void;
} {
  const file = openSync(path, 'r');
  const { size } = fstatSync(file);
  return {
    sizeBytes: size,
    read(offset, length) {
      const bytes = Buffer.alloc(Math.max(0, Math.min(length, size - offset)));
      let done = 0;
      while (done < bytes.length) {
        const got = readSync(file, bytes, done, bytes.length - done, offset + done);
        if (got === 0) break;
        done += got;
      }
      return bytes.subarray(0, done);
    },
    close: () => closeSync(file),
  };
}
