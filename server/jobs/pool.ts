import { Piscina } from 'piscina';
import { AppError, type ErrorCode, type ErrorPlace } from '../errors.ts';
import type { WorkerAnswer, WorkerTask } from './worker.ts';

/** The worker threads: whatever takes longer than a moment runs here, so that the service always answers. */
export class Pool {
  private readonly threads: Piscina;
  readonly size: number;

  constructor(size = 2) {
    this.size = size;
    this.threads = new Piscina({
      filename: new URL('./worker.entry.mjs', import.meta.url).href,
      minThreads: 1,
      maxThreads: size,
      idleTimeout: 60_000,
    });
  }

  /** @throws {AppError} as thrown in the worker; the reason of `signal` when aborted, and its thread is stopped at once */
  async run<T extends WorkerTask>(task: T, signal?: AbortSignal): Promise<WorkerAnswer<T['kind']>> {
    const reply = (await this.threads.run(task, signal === undefined ? {} : { signal })) as
      | { readonly answer: WorkerAnswer<T['kind']> }
      | { readonly refused: { code: ErrorCode; detail: string; places: readonly ErrorPlace[] } };
    if ('refused' in reply) throw new AppError(reply.refused.code, reply.refused.detail, reply.refused.places);
    return reply.answer;
  }

  async close(): Promise<void> {
    await this.threads.destroy();
  }
}
