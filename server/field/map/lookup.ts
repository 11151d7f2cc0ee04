import { tracedLabeller } from '../labeller.ts';
import { bLossNtAt } from '../lossCurve.ts';
import { OPEN_RADIUS } from '../tracer.ts';
import type { FieldModel, MagneticLabel, MagneticLabeller } from '../types.ts';
import { nodeIndex } from './cells.ts';
import { CELL, EDGE_L_CLOSED, EDGE_L_OPEN, type FieldMap, fieldMapKey, gridAxes, U_STEP, V_STEP } from './grid.ts';

/** Rows and columns added all round, so that no stencil has to look over a pole or a full turn. */
const PAD = 2;

/** Share by which |B| must exceed an interpolated B_loss before the surface need not be asked any more. */
const LOST_FOR_SURE = 1.01;

/**
 * Labels points from a map of the same model: cubic interpolation (four nodes each way) of r/L and (B_min/B)^(1/3), |B|
 * itself exact. Both quantities are smooth over the magnetic equator and over the poles. Where the map cannot be trusted
 * (near jumps of L, the edge of the open lines, and where only some bounce paths of a cell meet the planet), and outside
 * 1 to 30 radii, the point is traced. The label of a point depends on the point alone.
 *
 * @throws {TypeError} when the map was made from anything but this very model by the code of today
 */
export function mappedLabeller(model: FieldModel, map: FieldMap): MagneticLabeller {
  if (map.key !== fieldMapKey(model, map.grid)) {
    throw new TypeError(`the map of ${map.modelId} was not made from this ${model.id}`);
  }
  const { shells, latitudes, longitudes, innerRadius, outerRadius } = map.grid;
  const { cells } = map;
  const padded = pad(map);
  const rowStride = 2 * (longitudes + 2 * PAD);
  const shellStride = rowStride * (latitudes + 2 * PAD);
  const axes = gridAxes(model);
  const traced = tracedLabeller(model, map.loss);
  const curve = map.loss;
  const b = new Float64Array(3);
  const weights = new Float64Array(12);
  const inverseFirst = 1 / innerRadius;
  const shellsPerInverse = (shells - 1) / (1 / outerRadius - inverseFirst);
  const rowsPerRadian = latitudes / Math.PI;
  const columnsPerRadian = longitudes / (2 * Math.PI);

  const labelInto = (x: number, y: number, z: number, out: MagneticLabel): MagneticLabel => {
    const radius = Math.sqrt(x * x + y * y + z * z);
    if (!(radius >= innerRadius && radius < OPEN_RADIUS)) return traced.labelInto(x, y, z, out);
    const shellAt = (1 / radius - inverseFirst) * shellsPerInverse;
    const cellShell = Math.min(Math.floor(shellAt), shells - 2);
    const p = x * axes[0] + y * axes[1] + z * axes[2];
    const q = x * axes[3] + y * axes[4] + z * axes[5];
    const s = x * axes[6] + y * axes[7] + z * axes[8];
    // Of the rows at half bands: row −1 is the last before the south pole.
    const rowAt = Math.atan2(s, Math.sqrt(p * p + q * q)) * rowsPerRadian + 0.5 * latitudes - 0.5;
    const row = Math.min(Math.max(Math.floor(rowAt), -1), latitudes - 1);
    let columnAt = Math.atan2(q, p) * columnsPerRadian;
    if (columnAt < 0) columnAt += longitudes;
    const column = Math.min(Math.floor(columnAt), longitudes - 1);
    const cell = cells[(cellShell * (latitudes + 1) + row + 1) * longitudes + column];
    if (cell === CELL.trace) return traced.labelInto(x, y, z, out);

    model.fieldInto(x, y, z, b);
    const bNt = Math.sqrt(b[0] * b[0] + b[1] * b[1] + b[2] * b[2]);
    out.bNt = bNt;
    if (cell === CELL.open) return asOpen(out);

    const firstShell = Math.min(Math.max(cellShell - 1, 0), shells - 4);
    cubicWeightsInto(shellAt - firstShell - 1, weights, 0);
    cubicWeightsInto(rowAt - row, weights, 4);
    cubicWeightsInto(columnAt - column, weights, 8);
    const c0 = weights[8];
    const c1 = weights[9];
    const c2 = weights[10];
    const c3 = weights[11];
    let at = firstShell * shellStride + (row - 1 + PAD) * rowStride + 2 * (column - 1 + PAD);
    let u = 0;
    let v = 0;
    for (let i = 0; i < 4; i++) {
      let uShell = 0;
      let vShell = 0;
      for (let j = 0; j < 4; j++) {
        const weight = weights[4 + j];
        uShell += weight * (c0 * padded[at] + c1 * padded[at + 2] + c2 * padded[at + 4] + c3 * padded[at + 6]);
        vShell += weight * (c0 * padded[at + 1] + c1 * padded[at + 3] + c2 * padded[at + 5] + c3 * padded[at + 7]);
        at += rowStride;
      }
      const weight = weights[i];
      u += weight * uShell;
      v += weight * vShell;
      at += shellStride - 4 * rowStride;
    }
    const lShell = radius / (u * U_STEP);
    if (cell === CELL.edge && !(lShell <= EDGE_L_CLOSED)) {
      return lShell >= EDGE_L_OPEN ? asOpen(out) : traced.labelInto(x, y, z, out);
    }
    const root = Math.min(1, v * V_STEP);
    out.lShell = lShell;
    out.bMinNt = bNt * root * root * root;
    out.bLossNt = bLossNtAt(curve, lShell);
    if (cell === CELL.mixed) {
      if (bNt < LOST_FOR_SURE * out.bLossNt) return traced.labelInto(x, y, z, out);
      out.reason = 'loss';
    } else {
      out.reason = cell === CELL.below || bNt >= out.bLossNt ? 'loss' : null;
    }
    return out;
  };
  return { model, method: 'map', mapKey: map.key, labelInto };
}

function asOpen(out: MagneticLabel): MagneticLabel {
  out.bMinNt = Number.NaN;
  out.lShell = Number.NaN;
  out.bLossNt = 0;
  out.reason = 'open';
  return out;
}

/** Weights of the nodes at −1, 0, 1 and 2 of the cubic through them, at t. */
function cubicWeightsInto(t: number, out: Float64Array, at: number): void {
  const before = t - 1;
  const far = t - 2;
  const after = t + 1;
  out[at] = (-t * before * far) / 6;
  out[at + 1] = (after * before * far) / 2;
  out[at + 2] = (-after * t * far) / 2;
  out[at + 3] = (after * t * before) / 6;
}

function pad(map: FieldMap): Uint16Array {
  const { grid, nodes } = map;
  const width = grid.longitudes + 2 * PAD;
  const height = grid.latitudes + 2 * PAD;
  const padded = new Uint16Array(2 * grid.shells * height * width);
  for (let shell = 0; shell < grid.shells; shell++) {
    for (let row = 0; row < height; row++) {
      for (let column = 0; column < width; column++) {
        const from = nodeIndex(grid, shell, row - PAD, column - PAD);
        const to = (shell * height + row) * width + column;
        padded[2 * to] = nodes[2 * from];
        padded[2 * to + 1] = nodes[2 * from + 1];
      }
    }
  }
  return padded;
}
