import { readFileSync } from 'node:fs';
import { bytesOf } from '../../server/ephemeris/index.ts';
import { fieldModel, tracedLabeller } from '../../server/field/index.ts';
import { computeExposure, type EnvironmentChoice } from '../../server/fluence/index.ts';
import { type Path, readTrajectory, writeOem } from '../../server/trajectory/index.ts';
import type { BenchRow } from './run.ts';

const STATES = 10_000;

/** The encounter of 1986, its path written out anew with as many evenly spaced states as the limits speak of. */
function denseFlyby(): Path {
  const url = new URL('../../fixtures/golden/encounters/uranus-1986.oem', import.meta.url);
  const { path } = readTrajectory(bytesOf(readFileSync(url)));
  const [{ startTdbS, stopTdbS }] = path.spans;
  const epochsTdbS = Array.from({ length: STATES }, (_, k) => startTdbS + ((stopTdbS - startTdbS) * k) / (STATES - 1));
  const state = new Float64Array(6);
  const states = epochsTdbS.flatMap((epoch) => [...path.stateInto(epoch, state)]);
  const oem = writeOem({
    objectName: 'DENSE',
    objectId: 'UNKNOWN',
    originator: 'BENCHMARK',
    creationDate: '2026-01-01T00:00:00',
    centerName: 'URANUS',
    headerComments: [],
    segments: [{ comments: [], epochsTdbS, states, interpolation: 'HERMITE', degree: 7 }],
  });
  return readTrajectory(bytesOf(new TextEncoder().encode(oem))).path;
}

export default async function fluenceBench(report: (row: BenchRow) => void): Promise<void> {
  const path = denseFlyby();
  const environment = (phase: EnvironmentChoice['phase']): EnvironmentChoice => ({
    fieldModelId: 'uranus-q3',
    rotationModelId: 'uranus-2025',
    beltModelId: 'uranus-belts-1',
    phase,
    sampledFieldModelIds: [],
  });
  const traced = tracedLabeller(fieldModel('uranus-q3'));
  const median = (phase: EnvironmentChoice['phase'], options: Parameters<typeof computeExposure>[2]) => {
    computeExposure(path, environment(phase), options);
    const times = [0, 1, 2, 3, 4].map(() => {
      const start = process.hrtime.bigint();
      computeExposure(path, environment(phase), options);
      return Number(process.hrtime.bigint() - start) / 1e9;
    });
    return times.sort((a, b) => a - b)[2];
  };
  const row = (name: string, phase: EnvironmentChoice['phase'], limit: string) =>
    report({
      name: `fluence::exposure:${name}:states=${STATES}`,
      value: median(phase, {}),
      unit: 's',
      rival: { name: 'traced', value: median(phase, { labellerFor: () => traced }) },
      limit: `at most ${limit}`,
    });
  row('one-phase', { mode: 'published' }, '0.2');
  row('36-phase-sweep', { mode: 'sweep', count: 36 }, '3');
}
