/** The figures of the environment page in a real browser: read by keyboard, saved as numbers, in both themes. */
import { existsSync, mkdirSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { createServer, type Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { pino } from 'pino';
import { type Browser, chromium, type Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { openStore } from '../../db/open.ts';
import { Shop } from '../../server/api/shop.ts';
import { createApp } from '../../server/app.ts';
import { BUILT_CLIENT, builtClient } from '../../server/clientPages.ts';
import { readConfig } from '../../server/config.ts';
import { Pool } from '../../server/jobs/pool.ts';

const CHROMIUM = '/usr/bin/chromium';
const READY = existsSync(CHROMIUM) && existsSync(join(BUILT_CLIENT, 'index.html'));
if (!READY) console.error(`${CHROMIUM} or the built client (npm run build) is missing: the browser tests are skipped`);
const SHOTS = fileURLToPath(new URL('../output/', import.meta.url));

describe.skipIf(!READY)('figures in a browser', () => {
  let dataDir: string;
  let shop: Shop;
  let pool: Pool;
  let server: Server;
  let browser: Browser;
  let page: Page;
  let base: string;
  const outside: string[] = [];

  beforeAll(async () => {
    mkdirSync(SHOTS, { recursive: true });
    dataDir = mkdtempSync(join(tmpdir(), 'sidelong-e2e-'));
    pool = new Pool();
    const store = openStore(dataDir);
    shop = new Shop(store, dataDir, pool, (error) => console.error(error));
    shop.studies.insert(null, 'Browser study', {
      description: '',
      requiredRdm: 2,
      verdictPercentile: 95,
      phaseTreatment: 'joint',
      extrapolatedShareLimit: 0.5,
      distributionMark: '',
    });
    const app = createApp(shop, readConfig({ DATA_DIR: dataDir }), pino({ level: 'silent' }), builtClient());
    server = createServer(app);
    await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
    base = `http://127.0.0.1:${(server.address() as AddressInfo).port}`;
    browser = await chromium.launch({
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
    page = await browser.newPage({ viewport: { width: 1280, height: 800 } });
    page.on('request', (request) => {
      if (!request.url().startsWith(base) && !request.url().startsWith('blob:')) outside.push(request.url());
    });
    page.on('console', (message) => {
      if (message.type() === 'error' && /Content Security Policy/.test(message.text())) outside.push(message.text());
    });
  });

  afterAll(async () => {
    await browser?.close();
    await shop?.runner.stop();
    server?.closeAllConnections();
    server?.close();
    await pool?.close();
    shop?.store.close();
    rmSync(dataDir, { recursive: true, force: true });
  });

  it('shows the fluence by L and the field models compared, read by keyboard and saved as numbers', async () => {
    await page.goto(`${base}/trajectories`);
    const file = fileURLToPath(new URL('../../fixtures/demo/uranus-flyby-high.oem', import.meta.url));
    await page.setInputFiles('input[type=file]', file);
    await page.getByRole('button', { name: 'Keep this trajectory' }).click();
    await page.getByRole('link', { name: 'See it in the belts' }).click();
    for (const [title, readOut, columns] of [
      [
        'Fluence by L',
        /^L .* electrons and .* protons cm⁻² above 1 MeV$/,
        '"species","lFrom","lTo","above1MeV_perCm2"',
      ],
      [
        'Field models compared on the same path',
        /: .* electrons cm⁻² above .* MeV$/,
        '"fieldModelId","threshold_MeV","electrons_perCm2","protonThreshold_MeV","protons_perCm2"',
      ],
    ] as const) {
      const drawing = page.getByRole('img', { name: new RegExp(`^${title}\\. `) });
      await drawing.waitFor({ timeout: 60_000 });
      await drawing.focus();
      await drawing.press('ArrowRight');
      const figure = page.locator('figure', { has: drawing });
      await figure.locator('.readout-text').filter({ hasText: readOut }).waitFor({ timeout: 5_000 });
      const [download] = await Promise.all([
        page.waitForEvent('download'),
        figure.getByRole('button', { name: 'CSV' }).click(),
      ]);
      expect(readFileSync(await download.path(), 'utf8').split('\r\n')[0]).toBe(columns);
    }
    for (const [width, height] of [
      [1280, 800],
      [820, 1180],
    ]) {
      await page.setViewportSize({ width, height });
      for (const colorScheme of ['light', 'dark'] as const) {
        await page.emulateMedia({ colorScheme });
        await page.screenshot({ path: join(SHOTS, `environment-${width}-${colorScheme}.png`), fullPage: true });
        expect(await page.evaluate(() => document.documentElement.scrollWidth)).toBeLessThanOrEqual(width);
      }
    }
  }, 180_000);

  it('asked nothing of the outside', () => {
    expect(outside).toEqual([]);
  });
});
