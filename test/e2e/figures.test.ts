/** The figures of the environment page in a real browser: read by keyboard, saved as numbers, in both themes. */
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import type { Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type BrowserService, READY, SHOTS, startBrowser } from './browser.ts';

describe.skipIf(!READY)('figures in a browser', () => {
  let service: BrowserService;
  let page: Page;
  let base: string;
  let outside: string[];

  beforeAll(async () => {
    service = await startBrowser(800);
    ({ page, base, outside } = service);
  });
  afterAll(() => service?.stop());

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
