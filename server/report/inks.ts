import type { Paint } from '../figures/scene.ts';

/**
 * How the paints of a scene come out on paper. Every ink is told apart by lightness and by dash, so that a page copied
 * in grey loses nothing; hue only helps those who print in colour.
 */
export interface Ink {
  readonly color: string;
  /** Dash pattern in points for strokes that set none themselves; empty is solid. */
  readonly dash: readonly number[];
}

const SOLID: readonly number[] = [];

const NAMED: Readonly<Record<string, Ink>> = {
  paper: { color: '#ffffff', dash: SOLID },
  ink: { color: '#1a1a1a', dash: SOLID },
  muted: { color: '#5c5c5c', dash: SOLID },
  rule: { color: '#c9c9c9', dash: SOLID },
  planet: { color: '#d5dbe0', dash: SOLID },
  path: { color: '#111111', dash: SOLID },
  field: { color: '#8a939b', dash: [1, 2] },
  electron: { color: '#123a5e', dash: SOLID },
  proton: { color: '#8a4b08', dash: [6, 2] },
  bremsstrahlung: { color: '#3f7d75', dash: [2, 2] },
  other: { color: '#777777', dash: [8, 2, 2, 2] },
  band: { color: '#b9c3cc', dash: SOLID },
  limit: { color: '#000000', dash: [4, 3] },
  good: { color: '#2f6b4f', dash: SOLID },
  warn: { color: '#9a6a00', dash: SOLID },
  bad: { color: '#7a1f2b', dash: SOLID },
};

/** Eight series: lightness and dash both change from one to the next. */
const SERIES: readonly Ink[] = [
  { color: '#0d2b45', dash: SOLID },
  { color: '#8a4b08', dash: [6, 2] },
  { color: '#3f7d75', dash: [2, 2] },
  { color: '#7b5ea7', dash: [8, 2, 2, 2] },
  { color: '#b07d2b', dash: [1, 2] },
  { color: '#4a6fa5', dash: [10, 3] },
  { color: '#5f5f5f', dash: [4, 1, 1, 1] },
  { color: '#a3536b', dash: [3, 4] },
];

/** @returns the ink of a paint; `none` has no ink and must not be asked for. */
export function inkOf(paint: Paint): Ink {
  const named = NAMED[paint];
  if (named !== undefined) return named;
  if (paint.startsWith('series')) return SERIES[Number(paint.slice('series'.length))];
  if (paint.startsWith('ramp')) return rampInk(Number(paint.slice('ramp'.length)));
  throw new TypeError(`no ink for paint ${paint}`);
}

/** Ten steps from nearly white to nearly black with a slight blue cast: monotone in lightness. */
function rampInk(step: number): Ink {
  const share = step / 9;
  const channel = (light: number, dark: number) => Math.round(light + (dark - light) * share);
  const hex = (value: number) => value.toString(16).padStart(2, '0');
  return { color: `#${hex(channel(245, 16))}${hex(channel(247, 30))}${hex(channel(249, 48))}`, dash: SOLID };
}
