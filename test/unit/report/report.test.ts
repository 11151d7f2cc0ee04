import { execFileSync, spawnSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { three } from '../../../server/figures/index.ts';
import { compareAssessments } from '../../../server/margin/index.ts';
import { renderReport } from '../../../server/report/index.ts';
import { CAUTIONS, VERDICT_WORDS } from '../../../server/report/words.ts';
import { smallReport, smallResult } from './fixture.ts';

const has = (command: string) => spawnSync(command, ['--version']).error === undefined;
const TOOLS = has('pdftotext') && has('qpdf') && has('pdffonts');
if (!TOOLS) console.error('pdftotext, pdffonts or qpdf is missing: the checks of the printed report are skipped');

let folder: string;
let bytes: Uint8Array;
const input = smallReport();

beforeAll(async () => {
  folder = mkdtempSync(join(tmpdir(), 'sidelong-report-'));
  bytes = await renderReport(input);
  writeFileSync(join(folder, 'report.pdf'), bytes);
});
afterAll(() => rmSync(folder, { recursive: true, force: true }));

describe('report', () => {
  it('gives the same bytes for the same report', async () => {
    expect(Buffer.compare(Buffer.from(await renderReport(input)), Buffer.from(bytes))).toBe(0);
  });

  it('stays below 5 MB', () => {
    expect(bytes.length).toBeLessThan(5e6);
  });

  it.skipIf(!TOOLS)('prints every dose and margin of the result, and the caution notes', () => {
    const text = execFileSync('pdftotext', ['-layout', join(folder, 'report.pdf'), '-'], { encoding: 'utf8' });
    const flat = text.replaceAll(/\s+/g, ' ');
    for (const row of input.result.shieldDose) {
      expect(flat).toContain(three(row.doseKradSi!.total));
      expect(flat).toContain(three(row.band!.p95));
    }
    for (const row of input.result.margins) expect(flat).toContain(three(row.achievedRdmP95));
    for (const { doseKradSi, bySource, damage } of input.result.shieldDose) {
      expect(bySource.map(({ name }) => name)).toEqual(input.result.otherSources.map(({ name }) => name));
      expect(doseKradSi!.other).toBeCloseTo(
        bySource.reduce((sum, one) => sum + one.doseKradSi, 0),
        12,
      );
      for (const one of bySource) expect(flat).toContain(three(one.doseKradSi));
      expect(flat).toContain(three(damage!.totalMeVPerG));
      expect(flat).toContain(three(damage!.neutronEquivalentPerCm2));
    }
    for (const { name, phase } of input.result.otherSources) {
      expect(flat).toContain(name.slice(0, 16));
      expect(flat).toContain(phase);
    }
    for (const note of CAUTIONS) expect(flat).toContain(note.slice(0, 30));
    expect(flat).toContain(input.result.provenance.resultSha256);
    expect(flat).not.toContain('�');
  });

  it.skipIf(!TOOLS)('is a sound, tagged PDF with all its fonts inside', () => {
    execFileSync('qpdf', ['--check', join(folder, 'report.pdf')]);
    const info = execFileSync('pdfinfo', [join(folder, 'report.pdf')], { encoding: 'utf8' });
    expect(info).toMatch(/Tagged:\s+yes/);
    const fonts = execFileSync('pdffonts', [join(folder, 'report.pdf')], { encoding: 'utf8' })
      .trim()
      .split('\n')
      .slice(2);
    expect(fonts.length).toBeGreaterThan(0);
    for (const font of fonts) expect(font).toMatch(/\syes\s+(yes|no)\s+yes\s/);
  });

  it.skipIf(!TOOLS)('prints what changed against the previous issue, dose by dose', async () => {
    const comparison = compareAssessments(smallResult(4), input.result);
    expect(comparison.inputs.length).toBeGreaterThan(0);
    const previous = { documentNumber: 'SL-7', issue: 'A', comparison };
    writeFileSync(join(folder, 'changed.pdf'), await renderReport({ ...input, previous }));
    const text = execFileSync('pdftotext', ['-layout', join(folder, 'changed.pdf'), '-'], { encoding: 'utf8' });
    const section = text.slice(text.lastIndexOf('Change against the previous issue')).replaceAll(/\s+/g, ' ');
    expect(section).toContain('Compared with SL-7, issue A');
    for (const row of comparison.doses) {
      expect(section).toContain(three(row.nominalBeforeKradSi));
      expect(section).toContain(three(row.ratio));
    }
    for (const { verdictAfter } of comparison.verdicts) expect(section).toContain(VERDICT_WORDS[verdictAfter]);
  });
});
