import { fieldLabeller, fieldModel, makeLabel, tracedLabeller } from '../../server/field/index.ts';
import { assembleFieldMap, DEFAULT_GRID, planFieldMap } from '../../server/field/map/index.ts';
import { makeLineSegment, SegmentTracer } from '../../server/field/tracer.ts';
import { Pool } from '../../server/jobs/pool.ts';
import { randomStream } from '../../server/numeric/random.ts';
import type { BenchRow } from './run.ts';

const REPEATS = 5;

/** Median of several warm runs, seconds. */
function medianSeconds(run: () => void): number {
  run();
  const times = Array.from({ length: REPEATS }, () => {
    const start = process.hrtime.bigint();
    run();
    return Number(process.hrtime.bigint() - start) / 1e9;
  });
  return times.sort((a, b) => a - b)[Math.floor(REPEATS / 2)];
}

export default async function fieldBench(report: (row: BenchRow) => void): Promise<void> {
  const random = randomStream(7, 0, 0);
  const points = Array.from({ length: 2000 }, () => {
    const radius = 2 + 10 * random.uniform();
    const z = 2 * random.uniform() - 1;
    const angle = 2 * Math.PI * random.uniform();
    const across = Math.sqrt(1 - z * z);
    return [radius * across * Math.cos(angle), radius * across * Math.sin(angle), radius * z] as const;
  });
  const dipole = fieldModel('uranus-dipole');
  for (const id of ['uranus-q3', 'neptune-o8'] as const) {
    const model = fieldModel(id);
    const out = new Float64Array(3);
    let sink = 0;
    const evaluate = (of: typeof model) => () => {
      for (let k = 0; k < 100; k++) for (const [x, y, z] of points) sink += of.fieldInto(x, y, z, out)[0];
    };
    const perCall = (of: typeof model) => (medianSeconds(evaluate(of)) / (100 * points.length)) * 1e9;
    report({
      name: `field::evaluate:${id}`,
      value: perCall(model),
      unit: 'ns',
      rival: { name: 'closed-form dipole', value: perCall(dipole) },
    });
    const tracer = new SegmentTracer(model);
    const segment = makeLineSegment();
    const seconds = medianSeconds(() => {
      for (const [x, y, z] of points) sink += tracer.segmentInto(x, y, z, 1, segment).bNt;
    });
    report({
      name: `field::trace-and-label:${id}`,
      value: points.length / seconds,
      unit: 'points/s',
      limit: 'at least 3000',
    });
    const label = makeLabel();
    const labelsPerSecond = (of: ReturnType<typeof fieldLabeller>, among: typeof points) =>
      among.length /
      medianSeconds(() => {
        for (const [x, y, z] of among) sink += of.labelInto(x, y, z, label).bNt;
      });
    const mapped = fieldLabeller(model);
    const traced = tracedLabeller(model);
    const trapped = points.filter(([x, y, z]) => mapped.labelInto(x, y, z, label).reason === null);
    report({
      name: `field::label:map:${id}`,
      value: labelsPerSecond(mapped, trapped),
      unit: 'points/s',
      rival: { name: 'traced', value: labelsPerSecond(traced, trapped) },
    });
    if (!Number.isFinite(sink)) throw new Error('a field came out as no number');
  }

  const pool = new Pool(2);
  // Two small tasks first, so that both threads have read the code.
  await Promise.all(
    planFieldMap('neptune-o8', DEFAULT_GRID, 2000)
      .slice(0, 4)
      .map((task) => pool.run({ kind: 'fieldMapShard', task })),
  );
  const start = process.hrtime.bigint();
  const tasks = planFieldMap('neptune-o8', DEFAULT_GRID, 32);
  const shards = await Promise.all(tasks.map((task) => pool.run({ kind: 'fieldMapShard', task })));
  assembleFieldMap('neptune-o8', DEFAULT_GRID, shards);
  report({
    name: 'field::build-map:neptune-o8,two-cores',
    value: Number(process.hrtime.bigint() - start) / 1e9,
    unit: 's',
    limit: 'at most 60',
  });
  await pool.close();
}
