import { existsSync, mkdirSync, mkdtempSync, rmSync } from 'node:fs';
import { createServer } from 'node:http';
import type { AddressInfo } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { pino } from 'pino';
import { chromium, type Page } from 'playwright-core';
import { openStore } from '../../db/open.ts';
import { Shop } from '../../server/api/shop.ts';
import { createApp } from '../../server/app.ts';
import { BUILT_CLIENT, builtClient } from '../../server/clientPages.ts';
import { readConfig } from '../../server/config.ts';
import { Pool } from '../../server/jobs/pool.ts';

const CHROMIUM = '/usr/bin/chromium';
/** Whether browser tests can run; when not, it is said once and they skip. */
export const READY = existsSync(CHROMIUM) && existsSync(join(BUILT_CLIENT, 'index.html'));
if (!READY) console.error(`${CHROMIUM} or the built client (npm run build) is missing: the browser tests are skipped`);
export const SHOTS = fileURLToPath(new URL('../output/', import.meta.url));

export interface BrowserService {
  readonly page: Page;
  readonly base: string;
  /** Requests that left the machine, and breaches of the content security policy. */
  readonly outside: string[];
  stop(): Promise<void>;
}

/** A service with an empty study on a temporary database, and a page of the built client on it. */
export async function startBrowser(heightPx: number): Promise<BrowserService> {
  mkdirSync(SHOTS, { recursive: true });
  const dataDir = mkdtempSync(join(tmpdir(), 'sidelong-e2e-'));
  const pool = new Pool();
  const store = openStore(dataDir);
  const shop = new Shop(store, dataDir, pool, (error) => console.error(error));
  shop.studies.insert(null, 'Browser study', {
    description: '',
    requiredRdm: 2,
    verdictPercentile: 95,
    phaseTreatment: 'joint',
    extrapolatedShareLimit: 0.5,
    distributionMark: '',
  });
  const app = createApp(shop, readConfig({ DATA_DIR: dataDir }), pino({ level: 'silent' }), builtClient());
  const server = createServer(app);
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const base = `http://127.0.0.1:${(server.address() as AddressInfo).port}`;
  const browser = await chromium.launch({
    executablePath: CHROMIUM,
    args: [
      '--headless',
      '--no-sandbox',
      '--disable-gpu',
      '--disable-quic',
      '--no-first-run',
      '--disable-background-networking',
      '--disable-component-update',
      '--disable-sync',
    ],
  });
  const page = await browser.newPage({ viewport: { width: 1280, height: heightPx } });
  const outside: string[] = [];
  page.on('request', (request) => {
    if (!request.url().startsWith(base) && !request.url().startsWith('blob:')) outside.push(request.url());
  });
  page.on('console', (message) => {
    if (message.type() === 'error' && /Content Security Policy/.test(message.text())) outside.push(message.text());
  });
  return {
    page,
    base,
    outside,
    async stop() {
      await browser.close();
      await shop.runner.stop();
      server.closeAllConnections();
      server.close();
      await pool.close();
      store.close();
      rmSync(dataDir, { recursive: true, force: true });
    },
  };
}
