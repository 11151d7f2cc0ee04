/**
 * Writes db/reference/loss-curves/<model>.json: B_loss(L) from drift shells traced whole, for the fields whose mirror points
 * dip inside the planet in slivers that a surface grid passes over. Run `npx tsx test/make/lossCurves.ts neptune-o8` and
 * `... uranus-ah5`; ten minutes of one core each. The field maps hold the curve: make them anew afterwards.
 */
import { writeFileSync } from 'node:fs';
import { DriftShellTracer, fieldModel } from '../../server/field/index.ts';

/** L between which the two curves part, and how many values in ln L. */
const SPANS: Readonly<Record<string, readonly [number, number, number]>> = {
  'neptune-o8': [2, 7.5, 28],
  'uranus-ah5': [3, 8, 16],
};
const DIGITS = 5;

const modelId = process.argv[2];
const span = SPANS[modelId];
if (span === undefined) throw new Error(`give one of ${Object.keys(SPANS).join(', ')}`);
const [first, last, count] = span;
const tracer = new DriftShellTracer(fieldModel(modelId));
const rows = Array.from({ length: count }, (_, i) => {
  const lShell = Number((first * (last / first) ** (i / (count - 1))).toPrecision(DIGITS));
  const bLossNt = Number(tracer.bLossNt(lShell).toPrecision(DIGITS));
  console.error(lShell, bLossNt);
  return { lShell, bLossNt };
});
writeFileSync(
  new URL(`../../db/reference/loss-curves/${modelId}.json`, import.meta.url),
  `{"modelId":"${modelId}","lShell":${JSON.stringify(rows.map((row) => row.lShell))},"bLossNt":${JSON.stringify(rows.map((row) => row.bLossNt))}}\n`,
);
