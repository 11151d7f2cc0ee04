import { aluminiumResponse } from '../../server/dose/aluminium.ts';
import { composeShield, stacksOf } from '../../server/shielding/composeShield.ts';
import { responseKey, shieldResponse } from '../../server/shielding/response.ts';
import type { ShieldInput, ShieldResponse, StackInput } from '../../server/shielding/types.ts';
import { runBeam } from '../../server/transport/beam.ts';
import type { BenchRow } from './run.ts';

/** Native figure of the same kind of step on a machine of this class, ns; the limit is 1.7 times that. */
const NATIVE_STEP_NS = 80;

export default async function transportBench(report: (row: BenchRow) => void): Promise<void> {
  const beam = () =>
    runBeam(
      {
        particle: 'electron',
        energyMeV: 1,
        incidence: { angleDeg: 0 },
        layers: [{ materialId: 'Al', thicknessGPerCm2: 1.2 }],
        bins: 48,
        histories: 20_000,
        seed: 1,
        photons: false,
      },
      () => performance.now(),
    );
  beam();
  const runs = Array.from({ length: 5 }, beam).sort((a, b) => a.nsPerStep - b.nsPerStep);
  report({
    name: 'transport::step:Al,1MeV,normal',
    value: runs[2].nsPerStep,
    unit: 'ns',
    limit: `${(1.7 * NATIVE_STEP_NS).toFixed(0)}`,
  });
  report({
    name: 'transport::histories:Al,1MeV,normal',
    value: runs[2].historiesPerS,
    unit: '1/s',
    limit: 'reference 1.04e5 to 1.31e5',
  });
  const stacks: readonly (readonly [string, StackInput])[] = [
    ['Al2.54mm', { geometry: 'slab', layers: [{ materialId: 'Al', thicknessMm: 2.54 }] }],
    [
      'Al1+Ta0.5+Al1mm',
      {
        geometry: 'slab',
        layers: [
          { materialId: 'Al', thicknessMm: 1 },
          { materialId: 'Ta', thicknessMm: 0.5 },
          { materialId: 'Al', thicknessMm: 1 },
        ],
      },
    ],
    ['sphere:Al2.54mm', { geometry: 'sphere', layers: [{ materialId: 'Al', thicknessMm: 2.54 }] }],
    ['shell:Al2.54mm', { geometry: 'shell', innerRadiusMm: 100, layers: [{ materialId: 'Al', thicknessMm: 2.54 }] }],
  ];
  for (const [name, stack] of stacks) {
    const start = process.hrtime.bigint();
    const { referenceErrorRel } = shieldResponse(stack, { effort: 'standard', targetMaterialId: 'Si', seed: 1 });
    report({
      name: `transport::response:${name},standard,one-core`,
      value: Number(process.hrtime.bigint() - start) / 1e9,
      unit: 's',
      limit: '40',
    });
    report({ name: `transport::error:${name}`, value: 100 * referenceErrorRel, unit: '%', limit: '2' });
  }
  const walls = Array.from({ length: 6 }, () => [{ materialId: 'Al', thicknessMm: 3 }]);
  const box: ShieldInput = { kind: 'box', box: { innerSizeMm: [300, 250, 200], positionMm: [20, 0, -60], walls } };
  const options = { effort: 'standard', targetMaterialId: 'Si', seed: 1 } as const;
  const responses = stacksOf(box).map((stack) => aluminiumResponse(responseKey(stack, options)));
  if (responses.some((response) => response === null)) throw new Error('the aluminium table lacks a depth');
  const times = Array.from({ length: 5 }, () => {
    const start = process.hrtime.bigint();
    composeShield(box, options, responses as ShieldResponse[]);
    return Number(process.hrtime.bigint() - start) / 1e6;
  }).sort((a, b) => a - b);
  report({ name: 'shielding::compose:box-of-aluminium', value: times[2], unit: 'ms' });
}
