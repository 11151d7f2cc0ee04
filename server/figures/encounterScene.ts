import { three } from './format.ts';
import type { Scene, SceneNode } from './scene.ts';

type Vector = readonly [number, number, number];

/** An encounter in ICRF axes and planet radii, planet as it stands at closest approach. */
export interface EncounterView {
  readonly planet: 'uranus' | 'neptune';
  readonly fieldModelId: string;
  readonly oblateness: number;
  readonly spinAxis: Vector;
  readonly dipoleAxis: Vector;
  readonly sunDirection: Vector;
  readonly fieldLines: readonly (readonly Vector[])[];
  readonly path: readonly { readonly hoursFromClosest: number; readonly utc: string; readonly position: Vector }[];
  readonly closest: { readonly utc: string; readonly position: Vector };
}

/** From where it is seen: from the Sun, along the spin axis, or square to both. */
export type EncounterLook = 'sun' | 'pole' | 'side';
export const ENCOUNTER_LOOKS: readonly (readonly [EncounterLook, string])[] = [
  ['side', 'across Sun and spin axis'],
  ['sun', 'from the Sun'],
  ['pole', 'along the spin axis'],
];

const WIDTH = 640;
const HEIGHT = 460;
/** What is shown round the planet: at least this, and as far as this many closest-approach radii, planet radii. */
const LEAST_SHOWN = 5;
const SHOWN_PERIAPSES = 4;
const MOST_SHOWN = 16;

/** Planet, axes, field lines and path, seen without perspective. */
export function encounterScene(view: EncounterView, look: EncounterLook): Scene {
  const [right, up, towards] = basis(view, look);
  const nearest = Math.hypot(...view.closest.position);
  const shown = Math.min(MOST_SHOWN, Math.max(LEAST_SHOWN, SHOWN_PERIAPSES * nearest));
  const scale = (0.5 * HEIGHT) / shown;
  const at = (vector: Vector): [number, number] => [
    WIDTH / 2 + scale * dot(vector, right),
    HEIGHT / 2 - scale * dot(vector, up),
  ];
  const line = (points: readonly Vector[]) => points.map((p, i) => `${i === 0 ? 'M' : 'L'}${spot(at(p))}`).join('');
  const behind = (p: Vector) => dot(p, towards) < 0 && Math.hypot(dot(p, right), dot(p, up)) < 1;
  const nodes: SceneNode[] = [];
  const drawn: SceneNode[] = [];
  for (const points of view.fieldLines) {
    drawn.push({ kind: 'path', d: line(points), stroke: 'field', strokeWidth: 0.8, fill: 'none' });
  }
  const axis = (direction: Vector, reach: number): readonly Vector[] => [
    times(direction, -reach),
    times(direction, reach),
  ];
  drawn.push({
    kind: 'path',
    d: line(axis(view.dipoleAxis, 1.9)),
    stroke: 'field',
    strokeWidth: 1.8,
    dash: [6, 4],
    fill: 'none',
  });
  drawn.push({ kind: 'path', d: line(axis(view.spinAxis, 1.9)), stroke: 'ink', strokeWidth: 1.8, fill: 'none' });
  drawn.push({
    kind: 'path',
    d: disc(view, right, up, at),
    fill: 'planet',
    fillOpacity: 0.85,
    stroke: 'ink',
    strokeWidth: 0.8,
  });
  const seen = view.path.filter(({ position }) => Math.hypot(...position) < 2.2 * shown);
  // Stretches behind the planet are left out of the line.
  let d = '';
  let broken = true;
  for (const { position } of seen) {
    if (behind(position)) {
      broken = true;
      continue;
    }
    d += `${broken ? 'M' : 'L'}${spot(at(position))}`;
    broken = false;
  }
  drawn.push({ kind: 'path', d, stroke: 'path', strokeWidth: 2.4, fill: 'none' });
  const span = seen.length === 0 ? 0 : seen[seen.length - 1].hoursFromClosest - seen[0].hoursFromClosest;
  const tickH = [0.5, 1, 2, 3, 6, 12, 24, 48].find((step) => span / step <= 10) ?? 96;
  for (let k = -20; k <= 20; k++) {
    const next = seen.findIndex(({ hoursFromClosest }) => hoursFromClosest >= k * tickH);
    if (next <= 0 || k === 0) continue;
    const [a, b] = [seen[next - 1], seen[next]];
    const share = (k * tickH - a.hoursFromClosest) / (b.hoursFromClosest - a.hoursFromClosest);
    if (!(share >= 0 && share <= 1)) continue;
    const p = a.position.map((v, i) => v + share * (b.position[i] - v)) as unknown as Vector;
    const [x, y] = at(p);
    if (behind(p)) continue;
    drawn.push(
      { kind: 'path', d: circle(x, y, 2.6), fill: 'path' },
      label(x + 6, y - 5, `${k > 0 ? '+' : ''}${three(k * tickH)} h`, 'muted'),
    );
  }
  const [cx, cy] = at(view.closest.position);
  drawn.push(
    { kind: 'path', d: circle(cx, cy, 5), stroke: 'path', strokeWidth: 2, fill: 'paper' },
    label(cx + 9, cy + 4, `closest, ${three(nearest)} radii`, 'ink'),
  );
  nodes.push({ kind: 'group', clip: { x: 0, y: 0, width: WIDTH, height: HEIGHT }, children: drawn });
  const sun = [dot(view.sunDirection, right), dot(view.sunDirection, up)];
  const reach = Math.hypot(sun[0], sun[1]);
  if (reach > 0.05) {
    const [x, y] = [56, 56];
    const [ex, ey] = [x + (30 * sun[0]) / reach, y - (30 * sun[1]) / reach];
    nodes.push(
      { kind: 'path', d: `M${n(x)},${n(y)}L${n(ex)},${n(ey)}`, stroke: 'warn', strokeWidth: 2, fill: 'none' },
      { kind: 'path', d: circle(ex, ey, 4), fill: 'warn' },
      label(20, 104, 'to the Sun', 'muted'),
    );
  } else nodes.push(label(20, 24, 'The Sun is behind you', 'muted'));
  const barRadii = shown > 8 ? 5 : 1;
  const barY = HEIGHT - 18;
  nodes.push(
    { kind: 'path', d: `M20,${barY}H${n(20 + barRadii * scale)}`, stroke: 'ink', strokeWidth: 2, fill: 'none' },
    label(20, barY - 7, `${barRadii} planet radi${barRadii === 1 ? 'us' : 'i'}`, 'ink'),
  );
  nodes.push(
    label(WIDTH - 190, HEIGHT - 34, 'solid: spin axis', 'ink'),
    label(WIDTH - 190, HEIGHT - 18, 'dashed: dipole axis, field lines', 'field'),
  );
  const name = view.planet === 'uranus' ? 'Uranus' : 'Neptune';
  return {
    widthPx: WIDTH,
    heightPx: HEIGHT,
    title: `Encounter with ${name}`,
    description: `The path passes ${name} at ${three(nearest)} planet radii on ${view.closest.utc}, seen ${ENCOUNTER_LOOKS.find(([id]) => id === look)?.[1]}; spin axis, dipole axis and field lines of ${view.fieldModelId} as at closest approach.`,
    nodes,
    readOuts: seen
      .filter(({ position }) => at(position).every((v, i) => v >= 0 && v <= (i === 0 ? WIDTH : HEIGHT)))
      .map(({ hoursFromClosest, utc, position }) => {
        const [x, y] = at(position);
        return {
          x,
          y,
          text: `${utc}, ${three(hoursFromClosest)} h from closest approach: ${three(Math.hypot(...position))} planet radii`,
        };
      }),
    data: {
      columns: ['utc', 'hoursFromClosest', 'xIcrf_planetRadii', 'yIcrf_planetRadii', 'zIcrf_planetRadii'],
      rows: view.path.map(({ utc, hoursFromClosest, position }) => [utc, hoursFromClosest, ...position]),
    },
  };
}

/** Unit vectors to the right, up and towards the viewer. */
function basis({ spinAxis, sunDirection }: EncounterView, look: EncounterLook): readonly [Vector, Vector, Vector] {
  const side = unit(cross(spinAxis, sunDirection));
  if (look === 'side') return [unit(cross(spinAxis, side)), spinAxis, side];
  if (look === 'pole') return [unit(cross(side, spinAxis)), side, spinAxis];
  return [side, unit(cross(sunDirection, side)), sunDirection];
}

/** Outline of the spheroid: the ellipse that its shadow along the line of sight is. */
function disc(view: EncounterView, right: Vector, up: Vector, at: (v: Vector) => [number, number]): string {
  const q = view.oblateness;
  const [sx, sy] = [dot(view.spinAxis, right), dot(view.spinAxis, up)];
  const tilt = Math.hypot(sx, sy);
  const minor = Math.sqrt(q * q * tilt * tilt + 1 - tilt * tilt);
  const [ux, uy] = tilt < 1e-9 ? [0, 1] : [sx / tilt, sy / tilt];
  return `${Array.from({ length: 73 }, (_, k) => {
    const angle = (2 * Math.PI * k) / 72;
    const [along, wide] = [minor * Math.sin(angle), Math.cos(angle)];
    const x = wide * uy + along * ux;
    const y = -wide * ux + along * uy;
    return `${k === 0 ? 'M' : 'L'}${spot(at([0, 1, 2].map((i) => x * right[i] + y * up[i]) as unknown as Vector))}`;
  }).join('')}Z`;
}

const dot = (a: Vector, b: Vector) => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
const times = (a: Vector, s: number): Vector => [a[0] * s, a[1] * s, a[2] * s];
const cross = (a: Vector, b: Vector): Vector => [
  a[1] * b[2] - a[2] * b[1],
  a[2] * b[0] - a[0] * b[2],
  a[0] * b[1] - a[1] * b[0],
];
const unit = (a: Vector): Vector => times(a, 1 / Math.hypot(...a));
const n = (value: number) => Number(value.toFixed(1));
const spot = ([x, y]: readonly [number, number]) => `${n(x)},${n(y)}`;
const circle = (x: number, y: number, r: number) =>
  `M${n(x - r)},${n(y)}a${r},${r} 0 1 0 ${2 * r},0a${r},${r} 0 1 0 ${-2 * r},0Z`;

function label(x: number, y: number, text: string, fill: 'ink' | 'muted' | 'field'): SceneNode {
  return { kind: 'text', x: n(x), y: n(y), text, sizePx: 11, anchor: 'start', fill };
}
