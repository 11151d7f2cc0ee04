import { readdirSync, readFileSync } from 'node:fs';
import { bytesOf } from '../../../server/ephemeris/index.ts';
import { AppError } from '../../../server/errors.ts';
import type { RandomStream } from '../../../server/numeric/random.ts';
import { readTrajectory, type TrajectoryRequest } from '../../../server/trajectory/index.ts';
import {
  chebyshev,
  differenceRecords,
  equalStates,
  packets,
  twoBodyStates,
  unequalStates,
  writeSpk,
} from '../../make/spkWriter.ts';
import { flyby } from '../../unit/trajectory/invented.ts';

const encoder = new TextEncoder();

/** Files that read, one for each kind and layout: what the mutations start from. */
export function seedFiles(): Uint8Array[] {
  const malformed = new URL('../../../fixtures/malformed/', import.meta.url);
  const encounters = new URL('../../../fixtures/golden/encounters/', import.meta.url);
  const orbit = (t: number): number[] => [90_000 + t, 12 * t, 3000 - t, 1, 12, -1];
  const centre = (t: number): number[] => [20 + 1e-4 * t, 5, -3, 1e-4, 0, 0];
  const epochs = Array.from({ length: 120 }, (_, i) => 60 * i);
  const { uranus } = JSON.parse(readFileSync(new URL('kernel-records.json', encounters), 'utf8'));
  const records: { epochTdbS: number; words: number[] }[] = uranus.spacecraft.records;
  const layouts: [number, number[]][] = [
    [2, chebyshev(orbit, 2, 0, 600, 12, 5)],
    [3, chebyshev(orbit, 3, 0, 600, 12, 5)],
    [5, twoBodyStates(orbit, epochs, 5.79e6)],
    [8, equalStates(orbit, 0, 60, 120, 5)],
    [9, unequalStates(orbit, epochs, 5)],
    [12, equalStates(orbit, 0, 60, 120, 3)],
    [13, unequalStates(orbit, epochs, 3)],
    [18, packets(orbit, () => [0, 0, 0], epochs, 0, 4)],
    [18, packets(orbit, () => [0, 0, 0], epochs, 1, 6)],
  ];
  const kernels = layouts.map(([type, words], i) =>
    writeSpk({
      littleEndian: i % 2 === 0,
      comments: 'invented',
      segments: [
        { target: -9, center: 7, type, startTdbS: 0, stopTdbS: 7140, words },
        { target: 799, center: 7, type: 2, startTdbS: 0, stopTdbS: 7140, words: chebyshev(centre, 2, 0, 7200, 1, 3) },
      ],
    }),
  );
  const [from, to] = [records[0].epochTdbS, records[2].epochTdbS];
  for (const dimension of [15, 20]) {
    const words = differenceRecords(records, dimension);
    const type = dimension === 15 ? 1 : 21;
    kernels.push(writeSpk({ segments: [{ target: -32, center: 7, type, startTdbS: from, stopTdbS: to, words }] }));
  }
  const table = `epoch_tdb_s,x_km,y_km,z_km,vx_km_s,vy_km_s,vz_km_s\n${epochs.map((t) => [t, ...orbit(t)].join(',')).join('\n')}\n`;
  return [
    ...readdirSync(malformed)
      .filter((name) => name.startsWith('good'))
      .map((name) => new Uint8Array(readFileSync(new URL(name, malformed)))),
    encoder.encode(
      flyby([
        { fromS: -9000, toS: 9000, stepS: 300 },
        { fromS: 12_000, toS: 20_000, stepS: 400 },
      ]),
    ),
    new Uint8Array(readFileSync(new URL('neptune-1989.oem', encounters))),
    encoder.encode(table),
    ...kernels,
  ];
}

const TOKENS = [
  'NaN',
  'Infinity',
  '-',
  '1e308',
  '-1e-320',
  '9'.repeat(40),
  '',
  ' ',
  '\t',
  '\0',
  '\r\n',
  '=',
  ',',
  '<',
  '>',
  '&x;',
  '"',
  'META_START',
  'META_STOP',
  'COVARIANCE_START',
  'COVARIANCE_STOP',
  'COMMENT',
  'EPOCH = ',
  '2045-01-01T00:00:60',
  '9999-12-31T23:59:59.999999999',
  '0000-01-01T00:00:00',
  'INTERPOLATION_DEGREE = 27',
  'TIME_SYSTEM = TCB',
  'CENTER_NAME = NEPTUNE BARYCENTER',
  'REF_FRAME = ECLIPJ2000',
  '<!DOCTYPE x [<!ENTITY a "b">]>',
  ']]>',
  '<![CDATA[',
  '<stateVector>',
  '</segment>',
  'é',
  '\ud800',
];
const WORDS = [
  0,
  -0,
  1,
  -1,
  0.5,
  2 ** 31,
  -(2 ** 31),
  1e300,
  -1e300,
  5e-324,
  Number.NaN,
  Number.POSITIVE_INFINITY,
  1e9,
  255,
  25,
  26,
];

/** A damaged copy: a few edits of bytes, spans, tokens, lines, or eight-byte words. */
export function mutated(seed: Uint8Array, random: RandomStream): Uint8Array {
  let bytes: Uint8Array<ArrayBuffer> = Uint8Array.from(seed);
  const edits = 1 + Math.floor(4 * random.uniform());
  for (let i = 0; i < edits && bytes.length > 0; i++) bytes = edited(bytes, random);
  return bytes;
}

function edited(bytes: Uint8Array<ArrayBuffer>, random: RandomStream): Uint8Array<ArrayBuffer> {
  const at = Math.floor(random.uniform() * bytes.length);
  const length = Math.floor(random.uniform() ** 3 * Math.min(2000, bytes.length - at));
  const spliced = (start: number, removed: number, inserted: Uint8Array): Uint8Array<ArrayBuffer> => {
    const out = new Uint8Array(bytes.length - removed + inserted.length);
    out.set(bytes.subarray(0, start));
    out.set(inserted, start);
    out.set(bytes.subarray(start + removed), start + inserted.length);
    return out;
  };
  switch (Math.floor(random.uniform() * 9)) {
    case 0:
      bytes[at] = Math.floor(random.uniform() * 256);
      return bytes;
    case 1:
      return bytes.slice(0, at);
    case 2:
      return spliced(at, length, new Uint8Array(0));
    case 3:
      return spliced(at, 0, bytes.slice(at, at + length));
    case 4:
      return spliced(at, Math.min(8, length), encoder.encode(TOKENS[Math.floor(random.uniform() * TOKENS.length)]));
    case 5: {
      const word = Math.floor(at / 8) * 8;
      if (word + 8 > bytes.length) return bytes;
      new DataView(bytes.buffer).setFloat64(
        word,
        WORDS[Math.floor(random.uniform() * WORDS.length)],
        random.uniform() < 0.5,
      );
      return bytes;
    }
    case 6: {
      const word = Math.floor(at / 4) * 4;
      if (word + 4 > bytes.length) return bytes;
      new DataView(bytes.buffer).setInt32(
        word,
        WORDS[Math.floor(random.uniform() * WORDS.length)] | 0,
        random.uniform() < 0.5,
      );
      return bytes;
    }
    case 7: {
      // A line moved to another place, as careless editing does.
      const end = bytes.indexOf(10, at);
      if (end < 0) return bytes;
      const line = bytes.slice(at, end + 1);
      return spliced(Math.floor(random.uniform() * bytes.length), 0, line);
    }
    default: {
      // One digit changed: the file stays well formed and says something else.
      for (let i = at; i < bytes.length; i++) {
        if (bytes[i] >= 0x30 && bytes[i] <= 0x39) {
          bytes[i] = 0x30 + Math.floor(random.uniform() * 10);
          break;
        }
      }
      return bytes;
    }
  }
}

export interface Outcome {
  readonly code: string;
  readonly milliseconds: number;
}

/**
 * Reads a file and, where it reads, evaluates the path inside its spans.
 *
 * @throws anything that is not a refusal, and TypeError for a reading that is not finite
 */
export function attempt(bytes: Uint8Array, request: TrajectoryRequest): Outcome {
  const start = performance.now();
  let code = '';
  try {
    const { summary, path } = readTrajectory(bytesOf(bytes), request);
    const out = new Float64Array(6);
    for (const span of path.spans.slice(0, 50)) {
      for (const share of [0, 0.37, 1]) {
        path.stateInto(share === 1 ? span.stopTdbS : span.startTdbS + share * (span.stopTdbS - span.startTdbS), out);
      }
    }
    JSON.stringify(summary);
    if (summary.reading.length < 4) throw new TypeError('the reading is incomplete');
  } catch (cause) {
    if (!(cause instanceof AppError)) throw cause;
    if (cause.message.length < 10 || /undefined(?! entity)/.test(cause.message))
      throw new TypeError(`poor refusal: ${cause.message}`);
    code = cause.code;
  }
  return { code, milliseconds: performance.now() - start };
}
