import { z } from 'zod';
import type { JobRow } from '../../db/jobs.ts';
import { defineRoute, type Route } from './routes.ts';
import { found, type Shop } from './shop.ts';

const jobSchema = z.object({
  id: z.string(),
  kind: z.string(),
  subjectId: z.string(),
  state: z.enum(['queued', 'running', 'done', 'failed', 'cancelled']),
  progress: z.number(),
  message: z.string(),
  problem: z.unknown().nullable(),
  createdUtc: z.string(),
});

export function jobRoutes(shop: Shop): Route[] {
  const read = (id: string) => found(shop.runner.rows.get(id), 'job', id);
  return [
    defineRoute({
      method: 'get',
      path: '/api/jobs/{id}',
      tag: 'jobs',
      summary: 'State and progress of a job',
      answer: jobSchema,
      handler: ({ params }) => onWireJob(read(params.id)),
    }),
    defineRoute({
      method: 'post',
      path: '/api/jobs/{id}/cancel',
      tag: 'jobs',
      summary: 'Cancel a job; a finished one stays as it is',
      answer: jobSchema,
      handler: ({ params }) => {
        read(params.id);
        return onWireJob(shop.runner.cancel(params.id)!);
      },
    }),
    defineRoute({
      method: 'get',
      path: '/api/jobs/{id}/events',
      tag: 'jobs',
      summary: 'Progress as server-sent events, until the job ends',
      answerType: 'text/event-stream',
      handler: ({ params, request, response }) => {
        read(params.id);
        response.writeHead(200, { 'Content-Type': 'text/event-stream', 'Cache-Control': 'no-store' });
        const send = () => {
          const job = onWireJob(read(params.id));
          response.write(`data: ${JSON.stringify(job)}\n\n`);
          if (job.state !== 'queued' && job.state !== 'running') close();
        };
        const close = () => {
          shop.runner.events.off(params.id, send);
          response.end();
        };
        shop.runner.events.on(params.id, send);
        request.on('close', close);
        send();
      },
    }),
  ];
}

function onWireJob(job: JobRow) {
  const { id, kind, subjectId, state, progress, message, createdUtc } = job;
  const problem = job.problem === null ? null : (JSON.parse(job.problem) as unknown);
  return { id, kind, subjectId, state, progress, message, problem, createdUtc };
}
