import { lossCurve } from '../lossCurve.ts';
import { fieldModel } from '../models.ts';
import { makeLineSegment, SegmentTracer } from '../tracer.ts';
import type { FieldModelId } from '../types.ts';
import { cellsOf } from './cells.ts';
import {
  type FieldMap,
  type FieldMapGrid,
  fieldMapKey,
  gridAxes,
  NODE,
  nodeCount,
  nodePositionInto,
  U_STEP,
  V_STEP,
} from './grid.ts';

/** Lines this long still carry a smooth L past the edge of the open lines, where stencils reach. */
const LOOK_BEYOND_RADIUS = 100;
/** Together good to 1e-6 in L at 99 nodes of 100, far below the step in which nodes are kept, at nearly twice the speed. */
const NODE_TRACING = { tolerance: 1e-6, nodeShare: 0.5 } as const;

/** The nodes from `first` to before `end` of a map: a plain serialisable value, fit for a worker. */
export interface FieldMapTask {
  readonly modelId: FieldModelId;
  readonly grid: FieldMapGrid;
  readonly first: number;
  readonly end: number;
}

/** What a task gives back: shapes (n, 2) and (n,). */
export interface FieldMapShard {
  readonly first: number;
  readonly nodes: Uint16Array;
  readonly flags: Uint8Array;
}

/** Splits a map into tasks of about equal work; any split gives the same map to the bit. */
export function planFieldMap(modelId: FieldModelId, grid: FieldMapGrid, shards: number): FieldMapTask[] {
  const total = nodeCount(grid);
  return Array.from({ length: shards }, (_, k) => ({
    modelId,
    grid,
    first: Math.round((total * k) / shards),
    end: Math.round((total * (k + 1)) / shards),
  }));
}

/** Traces the nodes of one task; each node by itself, so that the numbers do not depend on the split. */
export function traceFieldMapShard(task: FieldMapTask): FieldMapShard {
  const { grid, first, end } = task;
  const model = fieldModel(task.modelId);
  const axes = gridAxes(model);
  const tracer = new SegmentTracer(model, NODE_TRACING);
  const beyond = new SegmentTracer(model, { ...NODE_TRACING, openRadius: LOOK_BEYOND_RADIUS });
  const segment = makeLineSegment();
  const point = new Float64Array(3);
  const nodes = new Uint16Array(2 * (end - first));
  const flags = new Uint8Array(end - first);
  for (let index = first; index < end; index++) {
    const at = index - first;
    nodePositionInto(grid, axes, index, point);
    const [x, y, z] = point;
    tracer.segmentInto(x, y, z, 1, segment);
    let flag = 0;
    if (segment.end === 'open') {
      flag |= NODE.open;
      beyond.segmentInto(x, y, z, 1, segment);
    }
    if (segment.belowSurface) flag |= NODE.belowSurface;
    const u = Math.hypot(x, y, z) / segment.lShell / U_STEP;
    const v = Math.cbrt(segment.bMinNt / segment.bNt) / V_STEP;
    if (segment.end === 'closed' && u <= 65535 && v <= 65535.5) {
      nodes[2 * at] = Math.round(u);
      nodes[2 * at + 1] = Math.min(65535, Math.round(v));
    } else {
      flag |= NODE.invalid;
    }
    flags[at] = flag;
  }
  return { first, nodes, flags };
}

/**
 * Joins the shards of one plan, in any order.
 *
 * @throws {TypeError} when they do not cover every node once
 */
export function assembleFieldMap(
  modelId: FieldModelId,
  grid: FieldMapGrid,
  shards: readonly FieldMapShard[],
): FieldMap {
  const total = nodeCount(grid);
  const nodes = new Uint16Array(2 * total);
  const flags = new Uint8Array(total);
  let next = 0;
  for (const shard of [...shards].sort((a, b) => a.first - b.first)) {
    if (shard.first !== next) throw new TypeError(`field map shards leave a gap or overlap at node ${next}`);
    nodes.set(shard.nodes, 2 * shard.first);
    flags.set(shard.flags, shard.first);
    next += shard.flags.length;
  }
  if (next !== total) throw new TypeError(`field map shards end at node ${next} of ${total}`);
  const model = fieldModel(modelId);
  return {
    modelId,
    key: fieldMapKey(model, grid),
    grid,
    nodes,
    cells: cellsOf(grid, nodes, flags),
    loss: lossCurve(model),
  };
}
