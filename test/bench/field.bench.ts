import { fieldModel } from '../../server/field/index.ts';
import { makeLineSegment, SegmentTracer } from '../../server/field/tracer.ts';
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
    if (!Number.isFinite(sink)) throw new Error('a field came out as no number');
  }
}
