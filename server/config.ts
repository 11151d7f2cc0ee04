import { z } from 'zod';

const LOOPBACK = new Set(['127.0.0.1', 'localhost', '::1']);

const schema = z
  .object({
    HOST: z.string().min(1).default('127.0.0.1'),
    PORT: z.coerce.number().int().min(0).max(65_535).default(8787),
    DATA_DIR: z.string().min(1).default('./.sidelong'),
    TOKEN: z.string().min(16, 'TOKEN needs at least 16 characters').optional(),
    MAX_UPLOAD_MB: z.coerce.number().positive().max(4096).default(512),
    LOG_LEVEL: z.enum(['fatal', 'error', 'warn', 'info', 'debug', 'trace', 'silent']).default('info'),
    DEMO: z.enum(['on', 'off']).default('on'),
  })
  .refine((value) => LOOPBACK.has(value.HOST) || value.TOKEN !== undefined, {
    message: 'HOST is not a loopback address, so TOKEN must be set: nobody without it may reach the service',
    path: ['TOKEN'],
  });

export interface Config {
  readonly host: string;
  readonly port: number;
  readonly dataDir: string;
  readonly token: string | null;
  readonly maxUploadBytes: number;
  readonly logLevel: string;
  /** Seed the demo study into an empty database. */
  readonly demo: boolean;
}

/** Reads the environment once. @throws {Error} with one line per faulty variable */
export function readConfig(environment: NodeJS.ProcessEnv): Config {
  const parsed = schema.safeParse(environment);
  if (!parsed.success) {
    const lines = parsed.error.issues.map((issue) => `${issue.path.join('.')}: ${issue.message}`);
    throw new Error(`Configuration refused:\n${lines.join('\n')}`);
  }
  const value = parsed.data;
  return Object.freeze({
    host: value.HOST,
    port: value.PORT,
    dataDir: value.DATA_DIR,
    token: value.TOKEN ?? null,
    maxUploadBytes: Math.round(value.MAX_UPLOAD_MB * 1e6),
    logLevel: value.LOG_LEVEL,
    demo: value.DEMO === 'on',
  });
}
