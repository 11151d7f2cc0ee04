import type { ExposureSummary, SpeciesSummary } from '../fluence/summary.ts';
import { percent, three } from './format.ts';
import { decadesRound, FRAME, n, Plot } from './plot.ts';
import type { Paint, Scene } from './scene.ts';

const WIDTH = 640;
const HEIGHT = 280;
const DECADES = 8;

const EVIDENCE_WORDS: Readonly<Record<keyof SpeciesSummary['byEvidence'], string>> = {
  anchored: 'anchored',
  sampled: 'sampled',
  sampledQualitative: 'sampled, qualitative',
  extrapolated: 'where nothing was measured',
};

/** Nominal fluence above 1 MeV of both species by L bin, and in words the shares by evidence. */
export function fluenceByLScene(summary: ExposureSummary): Scene {
  const species = ['electron', 'proton'] as const;
  const bins = summary.species.electron.byL;
  const values = species.flatMap((name) => summary.species[name].byL.map((bin) => bin.above1MeVPerCm2));
  const [from, to] = decadesRound(values, DECADES);
  const plot = new Plot(
    WIDTH,
    HEIGHT,
    { kind: 'log', from: bins[0].lFrom, to: bins[bins.length - 1].lTo, label: 'L, reference radii of the field model' },
    { kind: 'log', from, to, label: 'Fluence > 1 MeV per bin, cm⁻²' },
  );
  // Steps, because a bin holds one number for all of its L.
  for (const name of species) {
    plot.curve(
      summary.species[name].byL.flatMap(({ lFrom, lTo, above1MeVPerCm2 }): [number, number][] => [
        [lFrom, above1MeVPerCm2],
        [lTo, above1MeVPerCm2],
      ]),
      name,
      2,
    );
  }
  plot.legend([
    ['electron', 'Electrons'],
    ['proton', 'Protons'],
  ]);
  const { byEvidence, byL } = summary.species.electron;
  const total = byL.reduce((sum, bin) => sum + bin.above1MeVPerCm2, 0);
  const shares = (Object.keys(EVIDENCE_WORDS) as (keyof typeof EVIDENCE_WORDS)[]).map(
    (region) => `${percent(byEvidence[region])} ${EVIDENCE_WORDS[region]}`,
  );
  return {
    widthPx: WIDTH,
    heightPx: HEIGHT,
    title: 'Fluence by L',
    description: `Electrons above 1 MeV: ${three(total)} cm⁻² over all L; by evidence ${shares.join(', ')}.`,
    nodes: plot.nodes,
    readOuts: bins.map((bin, i) => ({
      x: plot.x(Math.sqrt(bin.lFrom * bin.lTo)),
      y: plot.y(Math.min(Math.max(bin.above1MeVPerCm2, from), to)),
      text: `L ${three(bin.lFrom)} to ${three(bin.lTo)}: ${three(bin.above1MeVPerCm2)} electrons and ${three(summary.species.proton.byL[i].above1MeVPerCm2)} protons cm⁻² above 1 MeV`,
    })),
    data: {
      columns: ['species', 'lFrom', 'lTo', 'above1MeV_perCm2'],
      rows: species.flatMap((name) =>
        summary.species[name].byL.map((bin) => [name, bin.lFrom, bin.lTo, bin.above1MeVPerCm2]),
      ),
    },
  };
}

/** Electron fluence against threshold on the same path at the same phase, one line per field model, median belts. */
export function fieldComparisonScene(summary: ExposureSummary): Scene {
  const { fieldComparison, thresholdsMeV } = summary;
  const [from, to] = decadesRound(
    fieldComparison.flatMap((entry) => entry.electronPerCm2),
    DECADES,
  );
  const lowest = Math.min(...thresholdsMeV);
  const highest = Math.max(...thresholdsMeV);
  const plot = new Plot(
    WIDTH,
    HEIGHT,
    { kind: 'log', from: lowest, to: highest > lowest ? highest : lowest * 10, label: 'Threshold, MeV' },
    { kind: 'log', from, to, label: 'Electron fluence above, cm⁻²' },
  );
  const paint = (k: number) => `series${k % 8}` as Paint;
  fieldComparison.forEach((entry, k) => {
    plot.curve(
      thresholdsMeV.map((threshold, i) => [threshold, entry.electronPerCm2[i]]),
      paint(k),
      2,
    );
  });
  plot.legend(fieldComparison.map((entry, k) => [paint(k), entry.fieldModelId]));
  const at = Math.max(0, thresholdsMeV.indexOf(1));
  return {
    widthPx: WIDTH,
    heightPx: HEIGHT,
    title: 'Field models compared on the same path',
    description: `Electrons above ${three(thresholdsMeV[at])} MeV: ${fieldComparison
      .map((entry) => `${entry.fieldModelId} ${three(entry.electronPerCm2[at])} cm⁻²`)
      .join(', ')}.`,
    nodes: plot.nodes,
    readOuts: fieldComparison.flatMap((entry) =>
      thresholdsMeV.map((threshold, i) => ({
        x: n(plot.x(threshold)),
        y: entry.electronPerCm2[i] > 0 ? plot.y(Math.max(entry.electronPerCm2[i], from)) : HEIGHT - FRAME.bottom,
        text: `${entry.fieldModelId}: ${three(entry.electronPerCm2[i])} electrons cm⁻² above ${three(threshold)} MeV`,
      })),
    ),
    data: {
      columns: ['fieldModelId', 'threshold_MeV', 'electrons_perCm2', 'protonThreshold_MeV', 'protons_perCm2'],
      rows: fieldComparison.flatMap((entry) =>
        Array.from({ length: Math.max(thresholdsMeV.length, entry.protonPerCm2.length) }, (_, i) => [
          entry.fieldModelId,
          thresholdsMeV[i] ?? null,
          entry.electronPerCm2[i] ?? null,
          summary.thresholdsBySpeciesMeV.proton[i] ?? null,
          entry.protonPerCm2[i] ?? null,
        ]),
      ),
    },
  };
}
