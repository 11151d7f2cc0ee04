import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Express } from 'express';
import { pino } from 'pino';
import { openStore } from '../../db/open.ts';
import { Shop } from '../../server/api/shop.ts';
import { createApp } from '../../server/app.ts';
import { readConfig } from '../../server/config.ts';
import { Pool } from '../../server/jobs/pool.ts';

export interface TestService {
  readonly app: Express;
  readonly shop: Shop;
  /** Row counts of every table, to show that a refusal wrote nothing. */
  rows(): Record<string, number>;
  stop(): Promise<void>;
}

/** A service on a temporary database, without a port. */
export function startService(environment: Record<string, string> = {}): TestService {
  const dataDir = mkdtempSync(join(tmpdir(), 'sidelong-test-'));
  const config = readConfig({ DATA_DIR: dataDir, ...environment });
  const pool = new Pool();
  const store = openStore(dataDir);
  const shop = new Shop(store, dataDir, pool, (error) => console.error(error));
  const app = createApp(shop, config, pino({ level: 'silent' }));
  return {
    app,
    shop,
    rows: () =>
      Object.fromEntries(
        [
          'studies',
          'trajectories',
          'cases',
          'stacks',
          'options',
          'parts',
          'assessments',
          'reports',
          'jobs',
          'beltTables',
        ].map((table) => [table, (store.prepare(`SELECT count(*) AS n FROM ${table}`).get() as { n: number }).n]),
      ),
    async stop() {
      await shop.runner.stop();
      await pool.close();
      store.close();
      rmSync(dataDir, { recursive: true, force: true });
    },
  };
}
