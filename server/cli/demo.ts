/** The main job without a browser: `npm run demo -- --out DIR`. Everything goes through the HTTP API, as a user's would. */
import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { createServer } from 'node:http';
import type { AddressInfo } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { parseArgs } from 'node:util';
import { pino } from 'pino';
import { openStore } from '../../db/open.ts';
import { Shop } from '../api/shop.ts';
import { createApp } from '../app.ts';
import { readConfig } from '../config.ts';
import { seedDemo } from '../demo.ts';
import { three } from '../figures/index.ts';
import { Pool } from '../jobs/pool.ts';
import type { AssessmentResult } from '../margin/index.ts';

const { values } = parseArgs({ options: { out: { type: 'string' } } });
if (values.out === undefined) {
  console.error('Usage: npm run demo -- --out DIR');
  process.exit(2);
}
const out = values.out;
mkdirSync(out, { recursive: true });
const dataDir = mkdtempSync(join(tmpdir(), 'sidelong-demo-'));
const pool = new Pool();
const store = openStore(dataDir);
const shop = new Shop(store, dataDir, pool, (error) => console.error(error));
const log = pino({ level: 'error' });
const server = createServer(createApp(shop, readConfig({ DATA_DIR: dataDir }), log));
await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
const base = `http://127.0.0.1:${(server.address() as AddressInfo).port}`;

try {
  const seeded = await seedDemo(shop);
  if (seeded === null) throw new Error('the temporary database is not empty');
  shop.runner.start();
  const result = await finished(seeded.assessmentId);
  const report = (await (
    await fetch(`${base}/api/reports`, {
      method: 'POST',
      headers: { 'Content-Type': 'application/json' },
      body: JSON.stringify({
        assessmentId: seeded.assessmentId,
        title: 'Demo study: dose and margins',
        documentNumber: 'SL-DEMO-1',
        issue: '1',
        dateUtc: '2026-01-31',
        preparer: 'Demo',
        distribution: 'Demonstration, invented data',
      }),
    })
  ).json()) as { id: string };
  await save(`/api/reports/${report.id}/report.pdf`, 'report.pdf');
  await save(`/api/assessments/${seeded.assessmentId}/table.csv`, 'doses-and-margins.csv');
  await save(`/api/assessments/${seeded.assessmentId}/result.json`, 'result.json');
  print(result);
} finally {
  await shop.runner.stop();
  server.closeAllConnections();
  server.close();
  await pool.close();
  store.close();
  rmSync(dataDir, { recursive: true, force: true });
}

async function finished(id: string): Promise<AssessmentResult> {
  for (;;) {
    const state = (await (await fetch(`${base}/api/assessments/${id}`)).json()) as {
      state: string;
      progress: number;
      message: string;
      problem: unknown;
      result: AssessmentResult | null;
    };
    if (state.result !== null) return state.result;
    if (state.state === 'failed') throw new Error(JSON.stringify(state.problem));
    process.stderr.write(`\r${Math.round(state.progress * 100)} % ${state.message}\u001b[K`);
    await new Promise((resolve) => setTimeout(resolve, 500));
  }
}

async function save(path: string, name: string): Promise<void> {
  const response = await fetch(base + path);
  if (!response.ok) throw new Error(`${path} answered ${response.status}: ${await response.text()}`);
  writeFileSync(join(out, name), Buffer.from(await response.arrayBuffer()));
}

function print(result: AssessmentResult): void {
  process.stderr.write('\r\u001b[K');
  const name = (rows: readonly { name: string }[], key: string, id: string) =>
    rows.find((row) => (row as unknown as Record<string, string>)[key] === id)?.name ?? id;
  console.log('Dose behind each shield, krad(Si)\n');
  for (const row of result.shieldDose) {
    const band = row.band === null ? '' : `(5 to 95 %: ${three(row.band.p05)} to ${three(row.band.p95)})`;
    console.log(
      [
        name(result.cases, 'caseId', row.caseId).padEnd(24),
        name(result.options, 'optionId', row.optionId).padEnd(26),
        row.placeId.padEnd(8),
        (row.notAssessed ?? three(row.doseKradSi?.total)).padStart(10),
        band,
      ].join(' '),
    );
  }
  console.log('\nMargins at the 95th percentile\n');
  for (const row of result.margins) {
    console.log(
      [
        name(result.parts, 'partId', row.partId).padEnd(24),
        name(result.cases, 'caseId', row.caseId).padEnd(24),
        name(result.options, 'optionId', row.optionId).padEnd(26),
        three(row.achievedRdmP95).padStart(10),
        `of ${three(row.requiredRdm)}`,
        row.verdict,
      ].join(' '),
    );
  }
  console.log(
    `\nWritten to ${out}: report.pdf, doses-and-margins.csv, result.json. The study and its data are invented.`,
  );
}
