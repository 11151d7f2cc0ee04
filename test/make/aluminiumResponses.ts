/**
 * Makes db/reference/responses-aluminium/slab.json: responses of aluminium slabs at 24 depths. Run with
 * `npx tsx test/make/aluminiumResponses.ts`; takes some minutes of one core.
 */
import { writeFileSync } from 'node:fs';
import { shieldResponse } from '../../server/shielding/response.ts';
import type { StackInput } from '../../server/shielding/types.ts';
import { ENGINE_VERSION } from '../../server/version.ts';

const DEPTHS = 24;
const FIRST_MM = 0.05;
const LAST_MM = 25;
const DIGITS = 4;
const OPTIONS = { effort: 'standard', targetMaterialId: 'Si', seed: 2026 } as const;

const rounded = (values: Float64Array) => Array.from(values, (value) => Number(value.toPrecision(DIGITS)));

const rows = Array.from({ length: DEPTHS }, (_, i) => {
  const depthMm = Number((FIRST_MM * (LAST_MM / FIRST_MM) ** (i / (DEPTHS - 1))).toPrecision(DIGITS));
  const stack: StackInput = {
    geometry: 'slab',
    backing: 'none',
    layers: [{ materialId: 'Al', thicknessMm: depthMm }],
  };
  const started = process.cpuUsage().user;
  const { sha256, description, electron, proton, notices } = shieldResponse(stack, OPTIONS);
  console.error(`${depthMm} mm: ${((process.cpuUsage().user - started) / 1e6).toFixed(1)} s`);
  return {
    depthMm,
    sha256,
    description,
    notices,
    electron: Object.fromEntries(Object.entries(electron).map(([key, values]) => [key, rounded(values)])),
    proton: Object.fromEntries(Object.entries(proton).map(([key, values]) => [key, rounded(values)])),
  };
});

writeFileSync(
  new URL('../../db/reference/responses-aluminium/slab.json', import.meta.url),
  `{"engineVersion":"${ENGINE_VERSION}","effort":"${OPTIONS.effort}","targetMaterialId":"${OPTIONS.targetMaterialId}","rows":[\n` +
    `${rows.map((row) => JSON.stringify(row)).join(',\n')}\n]}\n`,
);
