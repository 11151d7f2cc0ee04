/**
 * Makes db/reference/responses-aluminium/{slab,sphere}.json: responses of aluminium at 34 depths. Run with
 * `npx tsx test/make/aluminiumResponses.ts slab` and `... sphere`; minutes of one core each.
 */
import { writeFileSync } from 'node:fs';
import { STANDARD_RESPONSE } from '../../server/jobs/shieldResponses.ts';
import { shieldResponse } from '../../server/shielding/response.ts';
import { nodeThicknessMm } from '../../server/shielding/shieldPlan.ts';
import type { StackInput } from '../../server/shielding/types.ts';
import { ENGINE_VERSION } from '../../server/version.ts';

/** The depths that slant paths through aluminium are interpolated from: powers of the node ratio, 0.0089 to 51 mm. */
const POWERS = [-18, 15] as const;
const DIGITS = 4;
const OPTIONS = STANDARD_RESPONSE;

const geometry = process.argv[2];
if (geometry !== 'slab' && geometry !== 'sphere') throw new Error('give slab or sphere');

const rounded = (values: Float64Array) => Array.from(values, (value) => Number(value.toPrecision(DIGITS)));

const rows = Array.from({ length: POWERS[1] - POWERS[0] + 1 }, (_, i) => {
  const depthMm = nodeThicknessMm(POWERS[0] + i);
  const stack: StackInput = { geometry, layers: [{ materialId: 'Al', thicknessMm: depthMm }] };
  const started = process.cpuUsage().user;
  const response = shieldResponse(stack, OPTIONS);
  const { sha256, description, electron, proton, notices, referenceErrorRel } = response;
  const seconds = ((process.cpuUsage().user - started) / 1e6).toFixed(1);
  console.error(`${depthMm} mm: ${seconds} s, ${(100 * referenceErrorRel).toFixed(2)} %`);
  return {
    depthMm,
    sha256,
    description,
    notices,
    referenceErrorRel: Number(referenceErrorRel.toPrecision(DIGITS)),
    electron: Object.fromEntries(Object.entries(electron).map(([key, values]) => [key, rounded(values)])),
    proton: Object.fromEntries(Object.entries(proton).map(([key, values]) => [key, rounded(values)])),
  };
});

writeFileSync(
  new URL(`../../db/reference/responses-aluminium/${geometry}.json`, import.meta.url),
  `{"engineVersion":"${ENGINE_VERSION}","effort":"${OPTIONS.effort}","targetMaterialId":"${OPTIONS.targetMaterialId}","rows":[\n` +
    `${rows.map((row) => JSON.stringify(row)).join(',\n')}\n]}\n`,
);
