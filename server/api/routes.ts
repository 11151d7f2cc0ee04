import type { Express, Request, Response } from 'express';
import type { z } from 'zod';
import { refuseShape } from './problem.ts';

export interface Call<B, Q> {
  readonly params: Readonly<Record<string, string>>;
  readonly query: Q;
  readonly body: B;
  readonly request: Request;
  readonly response: Response;
}

/** One call of the service: its schema at the door and in the documentation, and what answers it. */
export interface Route<B = unknown, Q = unknown> {
  readonly method: 'get' | 'post' | 'put' | 'delete';
  /** OpenAPI style, for example `/api/stacks/{id}`. */
  readonly path: string;
  readonly tag: string;
  readonly summary: string;
  readonly body?: z.ZodType<B>;
  readonly query?: z.ZodType<Q>;
  /** Media types other than JSON that the body may have; the handler reads the request itself. */
  readonly rawBody?: string;
  readonly answer?: z.ZodType;
  readonly answerType?: string;
  readonly status?: number;
  /** Returns the JSON to send, or undefined when it has answered itself. */
  readonly handler: (call: Call<B, Q>) => unknown;
}

export function defineRoute<B, Q>(route: Route<B, Q>): Route {
  return route as unknown as Route;
}

/** Hangs the calls into Express, shapes checked before a handler sees them. */
export function mountRoutes(app: Express, routes: readonly Route[]): void {
  for (const route of routes) {
    app[route.method](route.path.replaceAll(/\{(\w+)\}/g, ':$1'), async (request, response) => {
      const query = route.query === undefined ? request.query : parsed(route.query, request.query, 'query');
      const body =
        route.body === undefined || route.rawBody !== undefined
          ? request.body
          : parsed(route.body, request.body ?? {}, 'body');
      const answer = await route.handler({
        params: request.params as Record<string, string>,
        query,
        body,
        request,
        response,
      });
      if (answer === undefined || response.headersSent) return;
      if (route.status !== undefined) response.status(route.status);
      response.json(answer);
    });
  }
}

function parsed<T>(schema: z.ZodType<T>, value: unknown, where: 'body' | 'query'): T {
  const result = schema.safeParse(value);
  return result.success ? result.data : refuseShape(result.error, where);
}
