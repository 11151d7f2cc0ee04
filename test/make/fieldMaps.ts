/**
 * Writes db/reference/field-maps/<model>.map on two cores. Run: npx tsx test/make/fieldMaps.ts [model …]
 * The shards go to the same worker threads that serve everything else; their number does not change a byte.
 */
import { writeFileSync } from 'node:fs';
import { fieldModel } from '../../server/field/index.ts';
import {
  assembleFieldMap,
  DEFAULT_GRID,
  encodeFieldMap,
  MAPPED_MODELS,
  planFieldMap,
} from '../../server/field/map/index.ts';
import { Pool } from '../../server/jobs/pool.ts';

const SHARDS = 32;

const asked = process.argv.slice(2);
const pool = new Pool(2);
for (const id of asked.length === 0 ? MAPPED_MODELS : asked.map((name) => fieldModel(name).id)) {
  const start = process.hrtime.bigint();
  const tasks = planFieldMap(id, DEFAULT_GRID, SHARDS);
  const shards = await Promise.all(tasks.map((task) => pool.run({ kind: 'fieldMapShard', task })));
  const map = assembleFieldMap(id, DEFAULT_GRID, shards);
  const seconds = Number(process.hrtime.bigint() - start) / 1e9;
  const bytes = encodeFieldMap(map);
  writeFileSync(new URL(`../../db/reference/field-maps/${id}.map`, import.meta.url), bytes);
  const traced = map.cells.reduce((sum, cell) => sum + (cell === 0 ? 1 : 0), 0) / map.cells.length;
  console.log(
    `${id}: ${seconds.toFixed(1)} s, ${(bytes.length / 1e6).toFixed(2)} MB, ${(100 * traced).toFixed(1)} % of cells are traced, key ${map.key}`,
  );
}
await pool.close();
