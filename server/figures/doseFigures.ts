import type { ComparisonRow, DoseDepthRow, MarginRow, ShieldDoseRow } from '../margin/result.ts';
import { three } from './format.ts';
import { circle, decadesRound, line, n, Plot, text } from './plot.ts';
import type { ReadOut, Scene, SceneNode } from './scene.ts';

const WIDTH = 640;
const HEIGHT = 360;

/** Dose against depth, log-log: total with its band, and what each particle brings. */
export function doseDepthScene(
  row: DoseDepthRow,
  caseName: string,
  shields: readonly { depthMm: number; label: string }[] = [],
  size: { readonly widthPx: number; readonly heightPx: number } = { widthPx: WIDTH, heightPx: HEIGHT },
): Scene {
  const y = decadesRound([...row.totalKradSi, ...row.bandKradSi.p95], 7);
  const plot = new Plot(
    size.widthPx,
    size.heightPx,
    {
      kind: 'log',
      from: row.depthsMm[0],
      to: row.depthsMm[row.depthsMm.length - 1],
      label: `Depth in ${row.materialId}, mm`,
    },
    { kind: 'log', from: y[0], to: y[1], label: 'Dose, krad(Si)' },
  );
  plot.band(
    row.depthsMm.map((depth, i) => [depth, Math.max(row.bandKradSi.p05[i], y[0]), row.bandKradSi.p95[i]]),
    'band',
  );
  const series = [
    ['electron', 'Electrons', row.electronKradSi],
    ['bremsstrahlung', 'Bremsstrahlung', row.bremsstrahlungKradSi],
    ['proton', 'Protons', row.protonKradSi],
  ] as const;
  for (const [paint, , values] of series)
    plot.curve(
      row.depthsMm.map((depth, i) => [depth, values[i]]),
      paint,
    );
  plot.curve(
    row.depthsMm.map((depth, i) => [depth, row.totalKradSi[i]]),
    'ink',
    2.2,
  );
  for (const shield of shields) plot.vertical(shield.depthMm, 'limit', shield.label);
  plot.legend([
    ['ink', 'Total, nominal'],
    ...series.map(([paint, words]) => [paint, words] as const),
    ['band', '5 to 95 %'],
  ]);
  return {
    widthPx: size.widthPx,
    heightPx: size.heightPx,
    title: `Dose behind ${row.materialId}, ${caseName}`,
    description: `Total dose falls from ${three(row.totalKradSi[0])} krad(Si) at ${three(row.depthsMm[0])} mm to ${three(row.totalKradSi[row.totalKradSi.length - 1])} krad(Si) at ${three(row.depthsMm[row.depthsMm.length - 1])} mm.`,
    nodes: plot.nodes,
    readOuts: row.depthsMm.map((depth, i) => ({
      x: plot.x(depth),
      y: plot.y(Math.max(row.totalKradSi[i], y[0])),
      text: `${three(depth)} mm ${row.materialId}: ${three(row.totalKradSi[i])} krad(Si), 5 to 95 %: ${three(row.bandKradSi.p05[i])} to ${three(row.bandKradSi.p95[i])}`,
    })),
    data: {
      columns: [
        'depth_mm',
        'electron_kradSi',
        'bremsstrahlung_kradSi',
        'proton_kradSi',
        'total_kradSi',
        'p05_kradSi',
        'p50_kradSi',
        'p95_kradSi',
      ],
      rows: row.depthsMm.map((depth, i) => [
        depth,
        row.electronKradSi[i],
        row.bremsstrahlungKradSi[i],
        row.protonKradSi[i],
        row.totalKradSi[i],
        row.bandKradSi.p05[i],
        row.bandKradSi.p50[i],
        row.bandKradSi.p95[i],
      ]),
    },
  };
}

/** Nominal belt dose at one place against the rotation offset. */
export function phaseScene(row: ShieldDoseRow, where: string): Scene {
  const points = [...row.byPhase].sort((a, b) => a.offsetDeg - b.offsetDeg);
  const values = points.map((point) => point.doseKradSi);
  const y = decadesRound(values, 6);
  const from = Math.min(...points.map((point) => point.offsetDeg));
  const to = Math.max(...points.map((point) => point.offsetDeg));
  const plot = new Plot(
    WIDTH,
    260,
    { kind: 'linear', from, to: to > from ? to : from + 1, label: 'Rotation offset against the model, degrees east' },
    { kind: 'log', from: y[0], to: y[1], label: 'Dose, krad(Si)' },
  );
  plot.curve(
    points.map((point) => [point.offsetDeg, point.doseKradSi]),
    'electron',
    2,
  );
  if (row.worstPhase !== null) plot.mark(row.worstPhase.offsetDeg, row.worstPhase.doseKradSi, 'bad');
  return {
    widthPx: WIDTH,
    heightPx: 260,
    title: `Dose against rotation phase, ${where}`,
    description: `Between ${three(Math.min(...values))} and ${three(Math.max(...values))} krad(Si) over ${points.length} phases.`,
    nodes: plot.nodes,
    readOuts: points.map((point) => ({
      x: plot.x(point.offsetDeg),
      y: plot.y(Math.max(point.doseKradSi, y[0])),
      text: `${three(point.offsetDeg)}°: ${three(point.doseKradSi)} krad(Si)`,
    })),
    data: { columns: ['offset_deg', 'dose_kradSi'], rows: points.map((point) => [point.offsetDeg, point.doseKradSi]) },
  };
}

/** Characters that fit beside the bars; the read-out has the whole label. */
const LABEL_CHARACTERS = 52;

function shortened(label: string): string {
  return label.length <= LABEL_CHARACTERS ? label : `${label.slice(0, LABEL_CHARACTERS - 1)}…`;
}

/** Margins as bars from the 95th to the 50th percentile of the dose, against what is required. */
export function marginScene(entries: readonly { readonly label: string; readonly row: MarginRow }[]): Scene {
  const rowHeight = 24;
  const left = 300;
  const heightPx = 46 + entries.length * rowHeight;
  const drawn = entries.filter(({ row }) => row.achievedRdm !== null && row.achievedRdmP95 !== null);
  const values = drawn.flatMap(({ row }) => [row.achievedRdm!, row.achievedRdmP95!, row.requiredRdm]);
  const [from, to] = decadesRound(values, 8);
  const x = (value: number) =>
    left +
    ((Math.log(Math.min(Math.max(value, from), to)) - Math.log(from)) / Math.log(to / from)) * (WIDTH - left - 20);
  const nodes: SceneNode[] = [];
  const readOuts: ReadOut[] = [];
  const bottom = heightPx - 32;
  for (let e = Math.round(Math.log10(from)); e <= Math.round(Math.log10(to)); e++) {
    nodes.push(
      line(`M${n(x(10 ** e))},6V${bottom}`, 'rule', 0.6),
      text(x(10 ** e), bottom + 14, three(10 ** e), 'middle', 'muted'),
    );
  }
  nodes.push(text((left + WIDTH) / 2, heightPx - 4, 'Margin: capability over dose', 'middle', 'ink'));
  drawn.forEach(({ label, row }, index) => {
    const y = 18 + index * rowHeight;
    const low = x(row.achievedRdmP95!);
    const high = Math.max(x(row.achievedRdm!), low + 2);
    const met = row.verdict === 'meets';
    nodes.push(text(left - 8, y + 4, shortened(label), 'end', 'ink'));
    nodes.push({
      kind: 'path',
      d: `M${n(low)},${y - 6}H${n(high)}V${y + 6}H${n(low)}Z`,
      fill: met ? 'good' : 'bad',
      fillOpacity: 0.75,
    });
    const required = x(row.requiredRdm);
    nodes.push(line(`M${n(required)},${y - 10}V${y + 10}`, 'ink', 2));
    // Shape says it as well as colour: a dot for met, a cross for not.
    nodes.push(
      met
        ? { kind: 'path', d: circle(high + 9, y, 4), fill: 'good' }
        : line(
            `M${n(high + 5)},${y - 4}L${n(high + 13)},${y + 4}M${n(high + 13)},${y - 4}L${n(high + 5)},${y + 4}`,
            'bad',
            2,
          ),
    );
    readOuts.push({
      x: low,
      y,
      text: `${label}: ${three(row.achievedRdmP95)} at 95 %, ${three(row.achievedRdm)} at 50 %, required ${three(row.requiredRdm)}`,
    });
  });
  return {
    widthPx: WIDTH,
    heightPx,
    title: 'Design margins',
    description: drawn
      .map(
        ({ label, row }) =>
          `${label}: ${three(row.achievedRdmP95)} to ${three(row.achievedRdm)}, required ${three(row.requiredRdm)}`,
      )
      .join('; '),
    nodes,
    readOuts,
    data: {
      columns: ['what', 'margin_p95', 'margin_p50', 'required'],
      rows: drawn.map(({ label, row }) => [label, row.achievedRdmP95, row.achievedRdm, row.requiredRdm]),
    },
  };
}

/** Median dose against mass; filled marks are options that nothing beats in both. */
export function massScene(
  entries: readonly { readonly label: string; readonly row: ComparisonRow }[],
  where: string,
): Scene {
  const drawn = entries.filter(({ row }) => row.massKg !== null && row.doseKradSi !== null);
  const masses = drawn.map(({ row }) => row.massKg!);
  const y = decadesRound(
    drawn.flatMap(({ row }) => [row.doseKradSi!.p05, row.doseKradSi!.p95]),
    7,
  );
  const plot = new Plot(
    WIDTH,
    HEIGHT,
    { kind: 'linear', from: 0, to: Math.max(1, ...masses) * 1.15, label: 'Mass, kg' },
    { kind: 'log', from: y[0], to: y[1], label: 'Dose, krad(Si)' },
  );
  for (const { label, row } of drawn) {
    const dose = row.doseKradSi!;
    plot.curve(
      [
        [row.massKg!, Math.max(dose.p05, y[0])],
        [row.massKg!, dose.p95],
      ],
      'muted',
      1.2,
    );
    plot.mark(row.massKg!, Math.max(dose.p50, y[0]), 'electron', row.nonDominated === true);
    plot.write(plot.x(row.massKg!) + 8, plot.y(Math.max(dose.p50, y[0])) - 6, label);
  }
  return {
    widthPx: WIDTH,
    heightPx: HEIGHT,
    title: `Dose against mass, ${where}`,
    description: drawn
      .map(({ label, row }) => `${label}: ${three(row.massKg)} kg, ${three(row.doseKradSi!.p50)} krad(Si)`)
      .join('; '),
    nodes: plot.nodes,
    readOuts: drawn.map(({ label, row }) => ({
      x: plot.x(row.massKg!),
      y: plot.y(Math.max(row.doseKradSi!.p50, y[0])),
      text: `${label}: ${three(row.massKg)} kg, ${three(row.doseKradSi!.p50)} krad(Si) (${three(row.doseKradSi!.p05)} to ${three(row.doseKradSi!.p95)})`,
    })),
    data: {
      columns: ['option', 'mass_kg', 'p05_kradSi', 'p50_kradSi', 'p95_kradSi'],
      rows: drawn.map(({ label, row }) => [
        label,
        row.massKg,
        row.doseKradSi!.p05,
        row.doseKradSi!.p50,
        row.doseKradSi!.p95,
      ]),
    },
  };
}
