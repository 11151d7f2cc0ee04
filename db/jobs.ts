import { newId } from './documents.ts';
import type { Store } from './open.ts';

export type JobState = 'queued' | 'running' | 'done' | 'failed' | 'cancelled';

export interface JobRow {
  readonly id: string;
  readonly kind: string;
  readonly subjectId: string;
  readonly input: string;
  readonly state: JobState;
  readonly progress: number;
  readonly message: string;
  readonly result: string | null;
  readonly problem: string | null;
  readonly createdUtc: string;
}

/** Rows of the job queue. */
export class JobRows {
  private readonly store: Store;

  constructor(store: Store) {
    this.store = store;
  }

  add(kind: string, subjectId: string, input: unknown): JobRow {
    const id = newId();
    this.store
      .prepare("INSERT INTO jobs (id, kind, subjectId, input, state, createdUtc) VALUES (?, ?, ?, ?, 'queued', ?)")
      .run(id, kind, subjectId, JSON.stringify(input), new Date().toISOString());
    return this.get(id)!;
  }

  get(id: string): JobRow | undefined {
    return this.store.prepare('SELECT * FROM jobs WHERE id = ?').get(id) as JobRow | undefined;
  }

  nextQueued(): JobRow | undefined {
    return this.store.prepare("SELECT * FROM jobs WHERE state = 'queued' ORDER BY createdUtc, rowid LIMIT 1").get() as
      | JobRow
      | undefined;
  }

  /** After a crash: what was running is queued again. */
  requeueInterrupted(): void {
    this.store.prepare("UPDATE jobs SET state = 'queued', progress = 0 WHERE state = 'running'").run();
  }

  set(id: string, change: Partial<Pick<JobRow, 'state' | 'progress' | 'message' | 'result' | 'problem'>>): void {
    const columns = Object.keys(change);
    this.store
      .prepare(`UPDATE jobs SET ${columns.map((column) => `${column} = @${column}`).join(', ')} WHERE id = @id`)
      .run({ id, ...change });
  }
}
