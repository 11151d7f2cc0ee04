/** Reads the ephemeris named on the command line and prints milliseconds and peak resident memory as JSON. */
import { fstatSync, openSync, readSync } from 'node:fs';
import { readTrajectory } from '../../server/trajectory/index.ts';

const descriptor = openSync(process.argv[2], 'r');
const source = {
  sizeBytes: fstatSync(descriptor).size,
  read(offset: number, length: number): Uint8Array {
    const bytes = new Uint8Array(length);
    readSync(descriptor, bytes, 0, length, offset);
    return bytes;
  },
};
const start = performance.now();
const { summary } = readTrajectory(source);
const milliseconds = performance.now() - start;
console.log(
  JSON.stringify({ milliseconds, peakMb: process.resourceUsage().maxRSS / 1024, stateCount: summary.stateCount }),
);
