import { readFileSync } from 'node:fs';
import { bytesOf } from '../../server/ephemeris/index.ts';
import { computeExposure, type EnvironmentChoice } from '../../server/fluence/index.ts';
import { readTrajectory } from '../../server/trajectory/index.ts';
import type { BenchRow } from './run.ts';

export default async function fluenceBench(report: (row: BenchRow) => void): Promise<void> {
  const url = new URL('../../fixtures/golden/encounters/uranus-1986.oem', import.meta.url);
  const { path } = readTrajectory(bytesOf(readFileSync(url)));
  const environment = (phase: EnvironmentChoice['phase']): EnvironmentChoice => ({
    fieldModelId: 'uranus-q3',
    rotationModelId: 'uranus-2025',
    beltModelId: 'uranus-belts-1',
    phase,
    sampledFieldModelIds: [],
  });
  const median = (phase: EnvironmentChoice['phase']) => {
    computeExposure(path, environment(phase));
    const times = [0, 1, 2].map(() => {
      const start = process.hrtime.bigint();
      computeExposure(path, environment(phase));
      return Number(process.hrtime.bigint() - start) / 1e9;
    });
    return times.sort((a, b) => a - b)[1];
  };
  report({ name: 'fluence::exposure:one-phase,traced', value: median({ mode: 'published' }), unit: 's', limit: '0.2' });
  report({
    name: 'fluence::exposure:36-phase-sweep,traced',
    value: median({ mode: 'sweep', count: 36 }),
    unit: 's',
    limit: '3',
  });
}
