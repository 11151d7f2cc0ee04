import { scaleLinear, scaleLog } from 'd3-scale';
import { powerOfTen } from './format.ts';
import type { Paint, SceneNode, ScenePath, SceneText } from './scene.ts';

/** The frame every chart of ours shares: margins, axes with units, grid lines, and lines and bands drawn in it. */
export interface Axis {
  readonly kind: 'linear' | 'log';
  readonly from: number;
  readonly to: number;
  /** What it shows, with its unit. */
  readonly label: string;
  /** How to print a tick; default by kind. */
  readonly tick?: (value: number) => string;
}

export const FRAME = { left: 66, right: 16, top: 14, bottom: 46 } as const;
const FONT_PX = 11;

export class Plot {
  readonly widthPx: number;
  readonly heightPx: number;
  readonly nodes: SceneNode[] = [];
  private readonly inside: SceneNode[] = [];
  private readonly toX: (value: number) => number;
  private readonly toY: (value: number) => number;

  constructor(widthPx: number, heightPx: number, x: Axis, y: Axis) {
    this.widthPx = widthPx;
    this.heightPx = heightPx;
    const right = widthPx - FRAME.right;
    const bottom = heightPx - FRAME.bottom;
    const xScale = scaleOf(x, [FRAME.left, right]);
    const yScale = scaleOf(y, [bottom, FRAME.top]);
    this.toX = xScale.at;
    this.toY = yScale.at;
    for (const value of xScale.ticks) {
      const px = this.toX(value);
      this.nodes.push(line(`M${n(px)},${FRAME.top}V${n(bottom)}`, 'rule', 0.6));
      this.nodes.push(text(px, bottom + 15, tickText(x, value), 'middle', 'muted'));
    }
    for (const value of yScale.ticks) {
      const py = this.toY(value);
      this.nodes.push(line(`M${FRAME.left},${n(py)}H${n(right)}`, 'rule', 0.6));
      this.nodes.push(text(FRAME.left - 6, py + 4, tickText(y, value), 'end', 'muted'));
    }
    this.nodes.push(line(`M${FRAME.left},${FRAME.top}V${n(bottom)}H${n(right)}`, 'ink', 1));
    this.nodes.push(text((FRAME.left + right) / 2, heightPx - 10, x.label, 'middle', 'ink'));
    this.nodes.push({ ...text(15, (FRAME.top + bottom) / 2, y.label, 'middle', 'ink'), rotateDeg: -90 });
    this.nodes.push({
      kind: 'group',
      clip: { x: FRAME.left, y: FRAME.top, width: right - FRAME.left, height: bottom - FRAME.top },
      children: this.inside,
    });
  }

  x(value: number): number {
    return this.toX(value);
  }

  y(value: number): number {
    return this.toY(value);
  }

  /** A line through the points that can be drawn; gaps where they cannot. */
  curve(points: readonly (readonly [number, number])[], stroke: Paint, strokeWidth = 1.6): void {
    let d = '';
    let pen = false;
    for (const [a, b] of points) {
      const px = this.toX(a);
      const py = this.toY(b);
      if (!Number.isFinite(px) || !Number.isFinite(py)) {
        pen = false;
        continue;
      }
      d += `${pen ? 'L' : 'M'}${n(px)},${n(py)}`;
      pen = true;
    }
    if (d !== '') this.inside.push(line(d, stroke, strokeWidth));
  }

  band(points: readonly (readonly [number, number, number])[], fill: Paint): void {
    const drawable = points.filter(([a, low, high]) =>
      [this.toX(a), this.toY(low), this.toY(high)].every(Number.isFinite),
    );
    if (drawable.length < 2) return;
    const up = drawable.map(([a, , high]) => `${n(this.toX(a))},${n(this.toY(high))}`);
    const down = [...drawable].reverse().map(([a, low]) => `${n(this.toX(a))},${n(this.toY(low))}`);
    this.inside.push({ kind: 'path', d: `M${up.join('L')}L${down.join('L')}Z`, fill, fillOpacity: 0.55 });
  }

  vertical(value: number, stroke: Paint, label?: string): void {
    const px = this.toX(value);
    this.inside.push(line(`M${n(px)},${FRAME.top}V${n(this.heightPx - FRAME.bottom)}`, stroke, 1, [4, 3]));
    if (label !== undefined) this.nodes.push(text(px + 4, FRAME.top + 11, label, 'start', 'muted'));
  }

  mark(a: number, b: number, paint: Paint, filled = true): void {
    const d = circle(this.toX(a), this.toY(b), 4.5);
    this.inside.push({ kind: 'path', d, stroke: paint, strokeWidth: 1.5, fill: filled ? paint : 'paper' });
  }

  write(px: number, py: number, words: string, anchor: SceneText['anchor'] = 'start', fill: Paint = 'ink'): void {
    this.nodes.push(text(px, py, words, anchor, fill));
  }

  /** Names of the series, upper right, each behind a sample of its line. */
  legend(entries: readonly (readonly [Paint, string])[]): void {
    const x = this.widthPx - FRAME.right - 8;
    entries.forEach(([paint, words], index) => {
      const y = FRAME.top + 14 + index * 15;
      this.nodes.push(text(x - 30, y, words, 'end', 'ink'));
      this.nodes.push(line(`M${x - 24},${y - 4}H${x}`, paint, 2));
    });
  }
}

interface Scaled {
  readonly at: (value: number) => number;
  readonly ticks: readonly number[];
}

function scaleOf(axis: Axis, range: [number, number]): Scaled {
  if (axis.kind === 'log') {
    const scale = scaleLog().domain([axis.from, axis.to]).range(range);
    const decades = Math.log10(axis.to / axis.from);
    const step = Math.max(1, Math.ceil(decades / 8));
    const ticks: number[] = [];
    for (let e = Math.ceil(Math.log10(axis.from) - 1e-9); e <= Math.log10(axis.to) + 1e-9; e += step)
      ticks.push(10 ** e);
    if (decades < 1.5) for (const tick of scale.ticks(5)) if (!ticks.includes(tick)) ticks.push(tick);
    return { at: (value) => (value > 0 ? scale(value) : Number.NaN), ticks };
  }
  const scale = scaleLinear().domain([axis.from, axis.to]).range(range);
  return { at: (value) => scale(value), ticks: scale.ticks(6) };
}

function tickText(axis: Axis, value: number): string {
  if (axis.tick !== undefined) return axis.tick(value);
  if (axis.kind === 'log') {
    const exponent = Math.round(Math.log10(value));
    const whole = Math.abs(value / 10 ** exponent - 1) < 1e-9;
    return whole && Math.abs(exponent) > 2 ? powerOfTen(exponent) : String(Number(value.toPrecision(2)));
  }
  return String(Number(value.toPrecision(6)));
}

export function line(d: string, stroke: Paint, strokeWidth: number, dash?: readonly number[]): ScenePath {
  return { kind: 'path', d, stroke, strokeWidth, ...(dash === undefined ? {} : { dash }) };
}

export function text(x: number, y: number, words: string, anchor: SceneText['anchor'], fill: Paint): SceneText {
  return { kind: 'text', x, y, text: words, sizePx: FONT_PX, anchor, fill };
}

export function circle(x: number, y: number, radius: number): string {
  const r = n(radius);
  return `M${n(x - radius)},${n(y)}A${r},${r},0,1,0,${n(x + radius)},${n(y)}A${r},${r},0,1,0,${n(x - radius)},${n(y)}Z`;
}

export function n(value: number): number {
  return Math.round(value * 100) / 100;
}

/** Whole decades round the positive values, at least one and at most `decades` below the top. */
export function decadesRound(values: readonly number[], decades = 8): [number, number] {
  const positive = values.filter((value) => value > 0 && Number.isFinite(value));
  if (positive.length === 0) return [0.1, 10];
  const top = Math.ceil(Math.log10(Math.max(...positive)) + 1e-9);
  const low = Math.floor(Math.log10(Math.min(...positive)));
  return [10 ** Math.max(low, top - decades), 10 ** Math.max(top, low + 1)];
}
