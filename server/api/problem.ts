import { randomUUID } from 'node:crypto';
import { z } from 'zod';
import { AppError, ERROR_CODES, type ErrorCode, type ErrorPlace } from '../errors.ts';

/** RFC 9457 problem details, as every refusal of the service looks on the wire. */
export const problemSchema = z
  .object({
    type: z.string(),
    title: z.string(),
    status: z.number().int(),
    code: z.string(),
    detail: z.string(),
    instance: z.string(),
    errors: z.array(
      z.object({
        pointer: z.string().optional(),
        line: z.number().int().optional(),
        field: z.string().optional(),
        detail: z.string(),
        got: z.union([z.string(), z.number(), z.boolean(), z.null()]).optional(),
        limit: z.union([z.string(), z.number()]).optional(),
        unit: z.string().optional(),
      }),
    ),
  })
  .meta({ id: 'Problem' });

export interface Problem {
  readonly type: string;
  readonly title: string;
  readonly status: number;
  readonly code: string;
  readonly detail: string;
  readonly instance: string;
  readonly errors: readonly ErrorPlace[];
}

export function problemType(code: ErrorCode): string {
  return `/api/problems/${code.toLowerCase().replaceAll('_', '-')}`;
}

/** @param instance - what was asked for; defects get an id of their own that the log repeats */
export function problemOf(error: unknown, instance: string): Problem {
  const code: ErrorCode = error instanceof AppError ? error.code : 'INTERNAL';
  const row = ERROR_CODES[code];
  return {
    type: problemType(code),
    title: row.title,
    status: row.status,
    code,
    detail:
      error instanceof AppError ? error.message : 'Something inside the service failed; your input was not changed.',
    instance: error instanceof AppError ? instance : `${instance}#${randomUUID()}`,
    errors: error instanceof AppError ? error.places : [],
  };
}

/** A body or query that does not fit: every fault with its JSON pointer. */
export function refuseShape(error: z.ZodError, where: 'body' | 'query'): never {
  const places = error.issues.map((issue): ErrorPlace => {
    const path = issue.path.map((key) => String(key));
    return {
      ...(where === 'body' ? { pointer: `#/${path.join('/')}` } : {}),
      field: path.join('.') || where,
      detail: issue.message,
    };
  });
  const first = places[0];
  throw new AppError('REQUEST_INVALID', `${first.pointer ?? first.field}: ${first.detail}.`, places);
}
