/** Reading a long message, and evaluating paths of kernels and messages. */
import { execFileSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { closeSync, mkdtempSync, openSync, readFileSync, rmSync, writeSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { BaryState, Body, MakeTime } from 'astronomy-engine';
import { bytesOf } from '../../server/ephemeris/index.ts';
import { randomStream } from '../../server/numeric/random.ts';
import { formatEpoch } from '../../server/time/index.ts';
import { planeStateInto } from '../../server/trajectory/conic.ts';
import { type Path, readTrajectory } from '../../server/trajectory/index.ts';
import { chebyshev, differenceRecords, unequalStates, writeSpk } from '../make/spkWriter.ts';

interface Row {
  name: string;
  value: number;
  unit: string;
  rival?: { name: string; value: number };
  limit?: string;
}

const LINES = 1_000_000;
const STATES = 400_000;
const REPEATS = 5;
const CONIC = { gmKm3S2: 5_793_951.256527211, periapsisKm: 33_000, eccentricity: 0.95 };
const START_TDB_S = 1.4e9;

export default async function bench(report: (row: Row) => void): Promise<void> {
  longMessage(report);
  evaluation(report);
}

/** A message of a million states, about 126 MB, in a process of its own; beside it hashing the same bytes. */
function longMessage(report: (row: Row) => void): void {
  const folder = mkdtempSync(join(tmpdir(), 'sidelong-bench-'));
  const file = join(folder, 'long.oem');
  try {
    writeLong(file);
    const script = new URL('readEphemeris.ts', import.meta.url).pathname;
    const run = (): { milliseconds: number; peakMb: number; stateCount: number } =>
      JSON.parse(execFileSync(process.execPath, ['--import', 'tsx', script, file], { encoding: 'utf8' }));
    const runs = [run(), run(), run()];
    if (runs[0].stateCount !== LINES) throw new Error(`${runs[0].stateCount} states instead of ${LINES}`);
    const bytes = readFileSync(file);
    const start = performance.now();
    createHash('sha256').update(bytes).digest('hex');
    const hashMs = performance.now() - start;
    report({
      name: `ephemeris::readMessage:lines=${LINES}`,
      value: median(runs.map((r) => r.milliseconds)) / 1000,
      unit: 's',
      rival: { name: 'SHA-256 of the same bytes alone', value: hashMs / 1000 },
      limit: '<= 6 s',
    });
    report({
      name: `ephemeris::readMessage:peakMemory:lines=${LINES}`,
      value: Math.max(...runs.map((r) => r.peakMb)),
      unit: 'MB',
      rival: { name: 'size of the file', value: bytes.length / 1e6 },
      limit: '<= 350 MB',
    });
  } finally {
    rmSync(folder, { recursive: true });
  }
}

function writeLong(file: string): void {
  const stepS = 30;
  const descriptor = openSync(file, 'w');
  const plane = new Float64Array(4);
  const stop = START_TDB_S + stepS * (LINES - 1);
  writeSync(
    descriptor,
    `CCSDS_OEM_VERS = 2.0\nCREATION_DATE = 2026-01-01T00:00:00\nORIGINATOR = BENCH\nMETA_START\nOBJECT_NAME = BENCH\nOBJECT_ID = BENCH\nCENTER_NAME = URANUS\nREF_FRAME = ICRF\nTIME_SYSTEM = UTC\nSTART_TIME = ${formatEpoch(START_TDB_S, 'UTC', 6)}\nSTOP_TIME = ${formatEpoch(stop, 'UTC', 6)}\nMETA_STOP\n`,
  );
  let block: string[] = [];
  for (let i = 0; i < LINES; i++) {
    planeStateInto(CONIC, i * stepS - 1e6, plane);
    const [x, y, vx, vy] = plane;
    const numbers = [x, y, 0.3 * y].map((v) => v.toFixed(9)).concat([vx, vy, 0.3 * vy].map((v) => v.toFixed(12)));
    block.push(`${formatEpoch(START_TDB_S + i * stepS, 'UTC', 6)} ${numbers.join(' ')}\n`);
    if (block.length === 20_000 || i === LINES - 1) {
      writeSync(descriptor, block.join(''));
      block = [];
    }
  }
  closeSync(descriptor);
}

/** States per second along paths of several kinds, epochs in order and at random; beside them a series of a planet. */
function evaluation(report: (row: Row) => void): void {
  const rival = astronomyStatesPerS();
  for (const [name, path] of paths()) {
    const [first] = path.spans;
    const random = randomStream(7, 0, 0);
    const ordered = Float64Array.from(
      { length: STATES },
      (_, i) => first.startTdbS + ((first.stopTdbS - first.startTdbS) * i) / STATES,
    );
    const shuffled = ordered.map(() => first.startTdbS + (first.stopTdbS - first.startTdbS) * random.uniform());
    for (const [order, epochs] of [
      ['ordered', ordered],
      ['random', shuffled],
    ] as const) {
      report({
        name: `ephemeris::stateInto:${name}:${order}:n=${STATES}`,
        value: statesPerS(path, epochs),
        unit: 'states/s',
        rival: { name: 'astronomy-engine, BaryState of Uranus', value: rival },
        ...(name.startsWith('spk') && order === 'ordered' ? { limit: '>= 1e6 states/s' } : {}),
      });
    }
  }
}

function* paths(): Generator<[string, Path]> {
  const orbit = (t: number): number[] => {
    const plane = planeStateInto(CONIC, t - START_TDB_S, new Float64Array(4));
    return [plane[0], plane[1], 0.3 * plane[1], plane[2], plane[3], 0.3 * plane[3]];
  };
  const planet = (t: number): number[] => [28 * Math.cos(t / 4e4), 28 * Math.sin(t / 4e4), 5, 0, 0, 0];
  const startTdbS = START_TDB_S - 50_000;
  const stopTdbS = START_TDB_S + 50_000;
  const center = {
    target: 799,
    center: 7,
    type: 2,
    startTdbS,
    stopTdbS,
    words: chebyshev(planet, 2, startTdbS, 20_000, 5, 12),
  };
  const epochs = Array.from({ length: 501 }, (_, i) => startTdbS + 200 * i);
  const kinds: [string, number, number[]][] = [
    ['spk2', 2, chebyshev(orbit, 2, startTdbS, 500, 200, 12)],
    ['spk3', 3, chebyshev(orbit, 3, startTdbS, 500, 200, 12)],
    ['spk9', 9, unequalStates(orbit, epochs, 9)],
    ['spk13', 13, unequalStates(orbit, epochs, 3)],
  ];
  for (const [name, type, words] of kinds) {
    const spacecraft = { target: -1, center: 7, type, startTdbS, stopTdbS, words };
    yield [name, readTrajectory(bytesOf(writeSpk({ segments: [spacecraft, center] }))).path];
  }
  const folder = new URL('../../fixtures/golden/encounters/', import.meta.url);
  const { uranus } = JSON.parse(readFileSync(new URL('kernel-records.json', folder), 'utf8'));
  const real: { epochTdbS: number; words: number[] }[] = uranus.spacecraft.records;
  const [from, to] = [real[0].epochTdbS, real[2].epochTdbS];
  const arrays = { target: -32, center: 7, type: 1, startTdbS: from, stopTdbS: to, words: differenceRecords(real, 15) };
  const centre = { ...center, startTdbS: from, stopTdbS: to, words: chebyshev(planet, 2, from, to - from, 1, 12) };
  yield ['spk1', readTrajectory(bytesOf(writeSpk({ segments: [arrays, centre] }))).path];
  yield ['message', readTrajectory(bytesOf(readFileSync(new URL('uranus-1986.oem', folder)))).path];
}

function statesPerS(path: Path, epochs: Float64Array): number {
  const out = new Float64Array(6);
  const rates: number[] = [];
  let sum = 0;
  for (let repeat = 0; repeat <= REPEATS; repeat++) {
    const start = performance.now();
    for (let i = 0; i < epochs.length; i++) sum += path.stateInto(epochs[i], out)[0];
    // The first repeat warms up.
    if (repeat > 0) rates.push((1000 * epochs.length) / (performance.now() - start));
  }
  if (!Number.isFinite(sum)) throw new Error('a state is not finite');
  return median(rates);
}

function astronomyStatesPerS(): number {
  const count = 5000;
  const rates: number[] = [];
  for (let repeat = 0; repeat <= REPEATS; repeat++) {
    const start = performance.now();
    let sum = 0;
    for (let i = 0; i < count; i++) sum += BaryState(Body.Uranus, MakeTime(16_000 + i * 0.01)).x;
    if (!Number.isFinite(sum)) throw new Error('a state is not finite');
    if (repeat > 0) rates.push((1000 * count) / (performance.now() - start));
  }
  return median(rates);
}

function median(values: number[]): number {
  return [...values].sort((a, b) => a - b)[values.length >> 1];
}
