import { contentHash } from '../../canonical.ts';
import { PLANETS } from '../../constants/planets.ts';
import { LOSS_ALTITUDE_KM, type LossCurve } from '../lossCurve.ts';
import { OPEN_RADIUS } from '../tracer.ts';
import type { FieldModel, FieldModelId } from '../types.ts';

/**
 * Nodes of a field map, body-fixed. Shells lie uniformly in 1/r, in which a multipole field is a power series; on each
 * shell latitude and longitude are taken about the dipole axis, so that the poles of the grid fall on open lines.
 * Rows of latitude lie at the middles of equal bands (none on a pole), columns start at longitude 0.
 * Index of a node: (shell · latitudes + row) · longitudes + column.
 */
export interface FieldMapGrid {
  readonly shells: number;
  /** Radii of the first and the last shell, reference radii. */
  readonly innerRadius: number;
  readonly outerRadius: number;
  readonly latitudes: number;
  /** Even: a row continues over the pole as itself, half a turn on. */
  readonly longitudes: number;
}

/** A map of one model: what a grid of traced points says about everything between them. */
export interface FieldMap {
  readonly modelId: FieldModelId;
  /** What it was made from: see fieldMapKey. */
  readonly key: string;
  readonly grid: FieldMapGrid;
  /** Shape (nodes, 2): r/L in steps of U_STEP and (B_min/B)^(1/3) in steps of V_STEP. */
  readonly nodes: Uint16Array;
  /** Shape (shells − 1, latitudes + 1, longitudes): one of CELL; row 0 reaches over the south pole, the last over the north. */
  readonly cells: Uint8Array;
  /** B_loss(L) of the model, so that nobody has to trace the whole surface again. */
  readonly loss: LossCurve;
}

/** Flags of a traced node; invalid: it has no L. */
export const NODE = { belowSurface: 1, open: 2, invalid: 4 } as const;

/** What a lookup does in a cell. */
export const CELL = {
  /** No interpolation: near a branch, a jump or the edge of the open lines. Zero, so that it is the default. */
  trace: 0,
  /** Interpolate; bounce paths clear the planet. */
  clear: 1,
  /** Interpolate; bounce paths dip into the planet. */
  below: 2,
  /** Interpolate; some bounce paths dip into the planet. */
  mixed: 3,
  /** Every line is open. */
  open: 4,
  /** Some lines are open: interpolate, and ask L; bounce paths clear the planet. */
  edge: 5,
} as const;

/**
 * Out where lines reach OPEN_RADIUS the field is nearly a dipole's and L nearly the radius of the apex: below the first
 * of these L a line is closed, above the second it is open, and only between them it has to be traced. (The shipped models
 * have open lines from L 29.67 and closed ones up to L 30.34.) A cell whose nodes say otherwise is traced.
 */
export const EDGE_L_CLOSED = 0.985 * OPEN_RADIUS;
export const EDGE_L_OPEN = 1.015 * OPEN_RADIUS;

/**
 * A node is rough when it differs by more than this share from the cubic through its neighbours one and three steps away.
 * On smooth ground that cubic, twice as coarse, errs sixteen times as much as the map does, so what passes is good to
 * about 0.1 %; a jump shows at half its height on both sides, so one of 2.5 % is always seen in the cell that holds it.
 */
export const ROUGH_SHARE = 0.0125;

/** r/L is at most about 1.5 where it is defined; (B_min/B)^(1/3) at most 1. Half a step is 0.003 % of a typical value. */
export const U_STEP = 2 / 65535;
export const V_STEP = 1 / 65535;

/** 259 200 nodes: about 40 s of tracing on one core, half of that on two; half a megabyte on disk. */
export const DEFAULT_GRID: FieldMapGrid = {
  shells: 36,
  innerRadius: 1,
  outerRadius: 32,
  latitudes: 60,
  longitudes: 120,
};

/** Raise whenever the meaning of the nodes, the choice of cells or B_loss(L) changes: older maps are then no longer used. */
const MAP_VERSION = 3;
const PROBES = 24;

export function nodeCount(grid: FieldMapGrid): number {
  return grid.shells * grid.latitudes * grid.longitudes;
}

/**
 * Content address of what a map is made from: grid, version, planet, and the field itself. The field enters by its values
 * at fixed probe points, to ten digits: any change of a coefficient, of the reference radius or of the evaluation shows.
 */
export function fieldMapKey(model: FieldModel, grid: FieldMapGrid): string {
  const out = new Float64Array(3);
  const probes: string[] = [];
  for (let k = 0; k < PROBES; k++) {
    // Points spread by irrational steps in longitude and height, between 1 and 3 radii.
    const height = ((k * 0.6180339887) % 1) * 1.8 - 0.9;
    const turn = (k * 0.7548776662) % 1;
    const radius = 1 + (2 * k) / PROBES;
    const x = radius * (2 * turn - 1);
    const y = radius * (1 - Math.abs(2 * turn - 1));
    model.fieldInto(x, y, radius * height, out);
    probes.push(...Array.from(out, (value) => value.toPrecision(10)));
  }
  const planet = PLANETS[model.planet];
  return contentHash({
    kind: 'field-map',
    version: MAP_VERSION,
    grid,
    modelId: model.id,
    referenceRadiusKm: model.referenceRadiusKm,
    dipoleMomentNt: model.dipoleMomentNt.toPrecision(12),
    surfaceKm: [planet.equatorialRadiusKm, planet.polarRadiusKm],
    openRadius: OPEN_RADIUS,
    lossAltitudeKm: LOSS_ALTITUDE_KM,
    edges: [ROUGH_SHARE, EDGE_L_CLOSED, EDGE_L_OPEN],
    steps: [U_STEP, V_STEP],
    probes,
  });
}

/** Axes of the grid in the body-fixed frame, rows e1, e2, e3 of shape (9,): e3 is the dipole axis. */
export function gridAxes(model: FieldModel): Float64Array {
  const [ax, ay, az] = model.dipoleAxis;
  // e1 is level (z × axis), or x itself for an axis along z.
  const level = Math.hypot(ax, ay);
  const e1 = level > 1e-9 ? [-ay / level, ax / level, 0] : [1, 0, 0];
  return Float64Array.of(
    e1[0],
    e1[1],
    e1[2],
    ay * e1[2] - az * e1[1],
    az * e1[0] - ax * e1[2],
    ax * e1[1] - ay * e1[0],
    ax,
    ay,
    az,
  );
}

/** Radius of a shell, reference radii. */
export function shellRadius(grid: FieldMapGrid, shell: number): number {
  const first = 1 / grid.innerRadius;
  return 1 / (first + ((1 / grid.outerRadius - first) * shell) / (grid.shells - 1));
}

/** Body-fixed position of a node, reference radii, shape (3,). */
export function nodePositionInto(grid: FieldMapGrid, axes: Float64Array, index: number, out: Float64Array): void {
  const column = index % grid.longitudes;
  const above = (index - column) / grid.longitudes;
  const row = above % grid.latitudes;
  const shell = (above - row) / grid.latitudes;
  const radius = shellRadius(grid, shell);
  const latitude = ((row + 0.5) / grid.latitudes - 0.5) * Math.PI;
  const longitude = (2 * Math.PI * column) / grid.longitudes;
  const p = radius * Math.cos(latitude) * Math.cos(longitude);
  const q = radius * Math.cos(latitude) * Math.sin(longitude);
  const s = radius * Math.sin(latitude);
  for (let c = 0; c < 3; c++) out[c] = p * axes[c] + q * axes[3 + c] + s * axes[6 + c];
}
