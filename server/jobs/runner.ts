import { EventEmitter, setMaxListeners } from 'node:events';
import { type JobRow, JobRows } from '../../db/jobs.ts';
import type { Store } from '../../db/open.ts';
import { problemOf } from '../api/problem.ts';

export interface JobContext {
  readonly signal: AbortSignal;
  /** @param share - 0 to 1 */
  progress(share: number, message: string): void;
}

export type JobHandler = (input: unknown, context: JobContext) => Promise<unknown>;

/** Runs queued jobs one after the other; each spreads its own work over the pool. Survives a crash: see `start`. */
export class Runner {
  readonly rows: JobRows;
  readonly events = new EventEmitter();
  private readonly handlers: ReadonlyMap<string, JobHandler>;
  private readonly onDefect: (error: unknown, job: JobRow) => void;
  private current: { id: string; abort: AbortController } | null = null;
  private stopped = false;
  private idle: Promise<void> = Promise.resolve();

  constructor(
    store: Store,
    handlers: ReadonlyMap<string, JobHandler>,
    onDefect: (error: unknown, job: JobRow) => void,
  ) {
    this.rows = new JobRows(store);
    this.handlers = handlers;
    this.onDefect = onDefect;
    this.events.setMaxListeners(0);
  }

  /** Takes up what an interrupted process left, and then whatever is queued. */
  start(): void {
    this.rows.requeueInterrupted();
    this.pump();
  }

  add(kind: string, subjectId: string, input: unknown): JobRow {
    if (!this.handlers.has(kind)) throw new TypeError(`no handler for jobs of kind ${kind}`);
    const job = this.rows.add(kind, subjectId, input);
    this.pump();
    return job;
  }

  /** @returns the job after the call; a finished job stays as it is */
  cancel(id: string): JobRow | undefined {
    const job = this.rows.get(id);
    if (job?.state === 'queued') this.change(id, { state: 'cancelled' });
    if (job?.state === 'running' && this.current?.id === id) {
      this.change(id, { state: 'cancelled' });
      this.current.abort.abort(new Error('cancelled'));
    }
    return this.rows.get(id);
  }

  /** Stops taking jobs; the running one goes back to the queue for the next start. */
  async stop(): Promise<void> {
    this.stopped = true;
    this.current?.abort.abort(new Error('stopping'));
    await this.idle;
  }

  private pump(): void {
    if (this.stopped || this.current !== null) return;
    const job = this.rows.nextQueued();
    if (job === undefined) return;
    const abort = new AbortController();
    // Every task in the pool listens to the one signal of its job.
    setMaxListeners(0, abort.signal);
    this.current = { id: job.id, abort };
    this.change(job.id, { state: 'running' });
    this.idle = this.execute(job, abort.signal).finally(() => {
      this.current = null;
      setImmediate(() => this.pump());
    });
  }

  private async execute(job: JobRow, signal: AbortSignal): Promise<void> {
    const handler = this.handlers.get(job.kind)!;
    try {
      const result = await handler(JSON.parse(job.input), {
        signal,
        progress: (share, message) => {
          if (!signal.aborted) this.change(job.id, { progress: Math.min(1, share), message });
        },
      });
      if (!signal.aborted)
        this.change(job.id, { state: 'done', progress: 1, message: '', result: JSON.stringify(result ?? null) });
    } catch (error) {
      if (this.stopped) this.rows.set(job.id, { state: 'queued', progress: 0 });
      else if (!signal.aborted) {
        const problem = problemOf(error, `/api/jobs/${job.id}`);
        if (problem.status >= 500) this.onDefect(error, job);
        this.change(job.id, { state: 'failed', problem: JSON.stringify(problem) });
      }
    }
  }

  private change(id: string, change: Parameters<JobRows['set']>[1]): void {
    this.rows.set(id, change);
    this.events.emit(id);
  }
}
