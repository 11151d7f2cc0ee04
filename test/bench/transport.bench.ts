import { shieldResponse } from '../../server/shielding/response.ts';
import type { StackInput } from '../../server/shielding/types.ts';
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
        histories: 4000,
        seed: 1,
        photons: false,
      },
      () => performance.now(),
    );
  beam();
  const runs = [beam(), beam(), beam()].sort((a, b) => a.nsPerStep - b.nsPerStep);
  report({
    name: 'transport::step:Al,1MeV,normal',
    value: runs[1].nsPerStep,
    unit: 'ns',
    limit: `${(1.7 * NATIVE_STEP_NS).toFixed(0)}`,
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
  ];
  for (const [name, stack] of stacks) {
    const start = process.hrtime.bigint();
    shieldResponse(stack, { effort: 'standard', targetMaterialId: 'Si', seed: 1 });
    report({
      name: `transport::response:${name},standard,one-core`,
      value: Number(process.hrtime.bigint() - start) / 1e9,
      unit: 's',
      limit: '40',
    });
  }
}
