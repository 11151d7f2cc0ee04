/** The three uses in a real browser: see the dose of an uploaded flyby, compare options, download a report. */
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import type { Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type BrowserService, READY, SHOTS, startBrowser } from './browser.ts';

describe.skipIf(!READY)('client in a browser', () => {
  let service: BrowserService;
  let page: Page;
  let base: string;
  let outside: string[];

  beforeAll(async () => {
    service = await startBrowser(900);
    ({ page, base, outside } = service);
  });
  afterAll(() => service?.stop());

  it('reads an upload back before keeping it', async () => {
    await page.goto(`${base}/trajectories`);
    const file = fileURLToPath(new URL('../../fixtures/demo/uranus-flyby-high.oem', import.meta.url));
    await page.setInputFiles('input[type=file]', file);
    await page
      .getByText(/Closest approach at/)
      .first()
      .waitFor();
    await page.getByRole('button', { name: 'Keep this trajectory' }).click();
    await page.getByRole('heading', { name: /what was read/ }).waitFor();
    await page.getByText('Put a case together').click();
    await page.locator('details[open] input[name=name]').fill('One flyby');
    await page.locator('details[open] input[inputmode=numeric]').fill('1');
    await page.getByRole('button', { name: 'Make case' }).click();
    await page.getByText('One flyby').first().waitFor();
    await page.screenshot({ path: join(SHOTS, 'trajectories.png'), fullPage: true });
  });

  it('shows a refusal with its line', async () => {
    const broken = fileURLToPath(new URL('../../fixtures/malformed/', import.meta.url));
    const { readdirSync } = await import('node:fs');
    const bad = readdirSync(broken).find((name) => name.endsWith('.oem') && !name.startsWith('good'));
    await page.goto(`${base}/trajectories`);
    await page.setInputFiles('input[type=file]', join(broken, bad!));
    await page.getByRole('alert').first().waitFor();
  });

  it('builds two shields and compares them', async () => {
    await page.goto(`${base}/shielding`);
    for (const [name, mm] of [
      ['Thin', '0.5'],
      ['Thick', '4'],
    ]) {
      await page.getByText('Build a stack').click();
      await page.locator('details[open] input').first().fill(name);
      await page.getByLabel('Thickness of layer 1').fill(mm);
      await page.getByRole('button', { name: 'Make stack' }).click();
      await page.getByRole('heading', { name, exact: true }).waitFor();
      await page.goto(`${base}/shielding`);
    }
    for (const name of ['Thin', 'Thick']) {
      await page.getByText('Put an option together').click();
      const form = page.getByRole('form', { name: 'New option' });
      await form.locator('input').first().fill(`${name} walls`);
      await form.locator('select').nth(1).selectOption({ label: name });
      await page.getByRole('button', { name: 'Make option' }).click();
      await page.getByRole('heading', { name: `${name} walls` }).waitFor();
      await page.goto(`${base}/shielding`);
    }
    await page.screenshot({ path: join(SHOTS, 'shielding.png'), fullPage: true });
    await page.goto(`${base}/parts`);
    await page
      .locator('textarea')
      .fill('partId,name,placeId,capabilityKradSi,capabilityBasis\nU1,Memory,deck,20,test\n');
    await page.getByRole('button', { name: 'Add these parts' }).click();
    await page.getByRole('cell', { name: 'Memory', exact: true }).waitFor();
    await page.goto(`${base}/margins`);
    await page.getByText('New assessment').click();
    await page.getByRole('button', { name: 'Assess' }).click();
    await page.getByRole('heading', { name: 'Dose behind each shield' }).waitFor({ timeout: 240_000 });
    await page.screenshot({ path: join(SHOTS, 'margins.png'), fullPage: true });
    await page.emulateMedia({ colorScheme: 'dark' });
    await page.setViewportSize({ width: 900, height: 1100 });
    await page.screenshot({ path: join(SHOTS, 'margins-dark.png'), fullPage: true });
    await page.emulateMedia({ colorScheme: 'light' });
    await page.setViewportSize({ width: 1280, height: 900 });
    expect(await page.getByRole('row', { name: /Thick walls/ }).count()).toBeGreaterThan(0);
  }, 300_000);

  it('adds another source, compares with the assessment before, and keeps a thickness that meets a dose', async () => {
    await page.goto(`${base}/margins`);
    await page.getByText('New assessment').click();
    await page.getByRole('textbox', { name: 'Name', exact: true }).fill('With cruise');
    await page.getByLabel('Source name').fill('Cruise protons');
    await page.getByLabel('Citation or origin').fill('Invented for this test');
    await page.getByLabel('Dose, krad(Si)').fill('1.5');
    await page.getByRole('button', { name: 'Add this source' }).click();
    await page.getByRole('button', { name: 'Remove Cruise protons' }).waitFor();
    await page.getByRole('button', { name: 'Assess', exact: true }).click();
    await page.getByRole('heading', { name: 'Beside the dose' }).waitFor({ timeout: 120_000 });
    await page.getByRole('cell', { name: 'Cruise protons' }).first().waitFor();
    await page.getByLabel('Compare with').selectOption({ index: 1 });
    await page.getByText('Other source “Cruise protons”: added').waitFor();
    await page.getByText('Doses that moved most').waitFor();
    await page.screenshot({ path: join(SHOTS, 'margins-compared.png'), fullPage: true });

    await page.goto(`${base}/shielding`);
    await page.getByText('Find the thickness for a target').click();
    await page.getByLabel('Dose at most, krad(Si)').fill('1000000');
    await page.getByRole('button', { name: 'Find thickness' }).click();
    await page.getByRole('button', { name: 'Keep Thin as a new stack' }).click({ timeout: 120_000 });
    await page.getByRole('heading', { name: /^Thin, .* mm for/ }).waitFor();
    await page.screenshot({ path: join(SHOTS, 'thickness.png'), fullPage: true });
  }, 300_000);

  it('issues a report and downloads it', async () => {
    await page.goto(`${base}/reports`);
    await page.getByRole('button', { name: 'Issue' }).click();
    const link = page.getByRole('link', { name: /SL-001/ });
    await link.waitFor({ timeout: 60_000 });
    const answer = await page.request.get(base + (await link.getAttribute('href')));
    expect((await answer.body()).subarray(0, 5).toString()).toBe('%PDF-');
    await page.screenshot({ path: join(SHOTS, 'reports.png'), fullPage: true });
  }, 90_000);

  it('has no violation of WCAG rules on any page, and asks nothing of other hosts', async () => {
    const { createRequire } = await import('node:module');
    const axe = createRequire(import.meta.url).resolve('axe-core/axe.min.js');
    const context = await page
      .context()
      .browser()!
      .newContext({ bypassCSP: true, viewport: { width: 1280, height: 900 } });
    const checked = await context.newPage();
    const found: string[] = [];
    for (const path of ['trajectories', 'environment', 'shielding', 'parts', 'margins', 'reports', 'about']) {
      await checked.goto(`${base}/${path}`);
      await checked.getByRole('heading', { level: 1 }).waitFor();
      await checked.waitForTimeout(400);
      await checked.addScriptTag({ path: axe });
      const violations = (await checked.evaluate(
        'axe.run(document, { runOnly: ["wcag2a", "wcag2aa", "wcag21aa", "wcag22aa"] }).then((r) => r.violations.map((v) => v.id + ": " + v.nodes.map((n) => n.html).join(" | ").slice(0, 300)))',
      )) as string[];
      found.push(...violations.map((violation) => `${path}: ${violation}`));
    }
    await context.close();
    expect(found).toEqual([]);
    expect(outside).toEqual([]);
  }, 120_000);
});
