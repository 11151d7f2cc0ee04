import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { openStore } from '../../db/open.ts';
import { Shop } from '../../server/api/shop.ts';
import { seedDemo } from '../../server/demo.ts';
import { Pool } from '../../server/jobs/pool.ts';
import type { AssessmentResult } from '../../server/margin/index.ts';
import type { BenchRow } from './run.ts';

/** The whole demo assessment on an empty database, its shield responses shipped. */
export default async function serviceBench(report: (row: BenchRow) => void): Promise<void> {
  const dataDir = mkdtempSync(join(tmpdir(), 'sidelong-bench-'));
  const pool = new Pool();
  const store = openStore(dataDir);
  const shop = new Shop(store, dataDir, pool, (error) => console.error(error));
  const seeded = await seedDemo(shop);
  const jobId = shop.assessments.get(seeded!.assessmentId)!.body.jobId;
  const start = process.hrtime.bigint();
  shop.runner.start();
  while (!['done', 'failed'].includes(shop.runner.rows.get(jobId)!.state)) {
    await new Promise((resolve) => setTimeout(resolve, 50));
  }
  const seconds = Number(process.hrtime.bigint() - start) / 1e9;
  const { state, result } = shop.runner.rows.get(jobId)!;
  const { resultPath } = JSON.parse(result ?? '{}') as { resultPath: string };
  const assessed = JSON.parse(readFileSync(shop.blobs.path(resultPath), 'utf8')) as AssessmentResult;
  const key = assessed.options[0].places[0].response!.sha256;
  const reads: number[] = [];
  for (let i = 0; i < 21; i++) {
    const before = process.hrtime.bigint();
    JSON.stringify(await shop.artefacts.get(key));
    reads.push(Number(process.hrtime.bigint() - before) / 1e6);
  }
  await pool.close();
  store.close();
  rmSync(dataDir, { recursive: true, force: true });
  if (state !== 'done') throw new Error(`the demo assessment ended as ${state}`);
  report({ name: 'service::cached-response', value: reads.sort((a, b) => a - b)[10], unit: 'ms', limit: '20' });
  report({ name: 'service::demo-assessment', value: seconds, unit: 's', limit: '60' });
}
