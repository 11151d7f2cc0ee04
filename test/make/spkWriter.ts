/**
 * Writes SPK kernels for tests: any segment words, either byte order, several summary records, a comment area.
 * Written from NAIF's required reading on DAF and SPK, apart from the reader.
 */
export interface SegmentToWrite {
  readonly target: number;
  readonly center: number;
  readonly type: number;
  readonly startTdbS: number;
  readonly stopTdbS: number;
  readonly words: readonly number[];
  readonly frame?: number;
  readonly name?: string;
}

export interface KernelToWrite {
  readonly segments: readonly SegmentToWrite[];
  readonly littleEndian?: boolean;
  readonly comments?: string;
}

const RECORD = 1024;

export function writeSpk(kernel: KernelToWrite): Uint8Array {
  const little = kernel.littleEndian ?? true;
  const commentText = kernel.comments === undefined ? '' : `${kernel.comments.replaceAll('\n', '\0')}\x04`;
  const commentRecords = Math.ceil(commentText.length / 1000);
  const groups = Math.max(1, Math.ceil(kernel.segments.length / 25));
  const forward = 2 + commentRecords;
  const firstWord = (forward - 1 + 2 * groups) * 128 + 1;
  const wordTotal = kernel.segments.reduce((sum, segment) => sum + segment.words.length, 0);
  const bytes = new Uint8Array((firstWord - 1 + wordTotal) * 8);
  const view = new DataView(bytes.buffer);
  const ascii = (offset: number, text: string): void => {
    for (let i = 0; i < text.length; i++) bytes[offset + i] = text.charCodeAt(i);
  };
  ascii(0, 'DAF/SPK ');
  view.setInt32(8, 2, little);
  view.setInt32(12, 6, little);
  ascii(16, 'WRITTEN FOR A TEST'.padEnd(60));
  const backward = forward + 2 * (groups - 1);
  view.setInt32(76, forward, little);
  view.setInt32(80, backward, little);
  view.setInt32(84, firstWord + wordTotal, little);
  ascii(88, little ? 'LTL-IEEE' : 'BIG-IEEE');
  ascii(699, 'FTPSTR:\r:\n:\r\n:\r\0:\x81:\x10\xce:ENDFTP');
  for (let i = 0; i < commentRecords; i++) ascii((1 + i) * RECORD, commentText.slice(1000 * i, 1000 * (i + 1)));
  let address = firstWord;
  for (let group = 0; group < groups; group++) {
    const members = kernel.segments.slice(25 * group, 25 * (group + 1));
    const record = (forward - 1 + 2 * group) * RECORD;
    view.setFloat64(record, group + 1 < groups ? forward + 2 * (group + 1) : 0, little);
    view.setFloat64(record + 8, group === 0 ? 0 : forward + 2 * (group - 1), little);
    view.setFloat64(record + 16, members.length, little);
    for (let i = 0; i < members.length; i++) {
      const segment = members[i];
      const at = record + 24 + 40 * i;
      view.setFloat64(at, segment.startTdbS, little);
      view.setFloat64(at + 8, segment.stopTdbS, little);
      const integers = [
        segment.target,
        segment.center,
        segment.frame ?? 1,
        segment.type,
        address,
        address + segment.words.length - 1,
      ];
      for (let k = 0; k < 6; k++) view.setInt32(at + 16 + 4 * k, integers[k], little);
      ascii(record + RECORD + 40 * i, (segment.name ?? 'TEST SEGMENT').padEnd(40).slice(0, 40));
      for (const word of segment.words) {
        view.setFloat64((address - 1) * 8, word, little);
        address++;
      }
    }
  }
  return bytes;
}

/** State at an epoch, shape (6,), km and km/s. */
export type Orbit = (epochTdbS: number) => ArrayLike<number>;

function every100th(epochs: readonly number[], count: number): number[] {
  return Array.from({ length: count }, (_, i) => epochs[100 * (i + 1) - 1]);
}

/** Words of types 9 (degree) and 13 (window − 1): states, epochs, directory, parameter, count. */
export function unequalStates(orbit: Orbit, epochs: readonly number[], parameter: number): number[] {
  const states = epochs.flatMap((epoch) => Array.from(orbit(epoch)));
  return [...states, ...epochs, ...every100th(epochs, Math.floor((epochs.length - 1) / 100)), parameter, epochs.length];
}

/** Words of types 8 and 12: states, first epoch, step, degree or window − 1, count. */
export function equalStates(orbit: Orbit, first: number, step: number, count: number, parameter: number): number[] {
  const states = Array.from({ length: count }, (_, i) => Array.from(orbit(first + i * step))).flat();
  return [...states, first, step, parameter, count];
}

/** Words of type 18: packets, epochs, directory, subtype, window, count; accelerations only for subtype 0. */
export function packets(
  orbit: Orbit,
  accelerationKmS2: (state: ArrayLike<number>) => readonly number[],
  epochs: readonly number[],
  subtype: 0 | 1,
  window: number,
): number[] {
  const data = epochs.flatMap((epoch) => {
    const state = Array.from(orbit(epoch));
    return subtype === 1 ? state : [...state, ...state.slice(3), ...accelerationKmS2(state)];
  });
  const directory = every100th(epochs, Math.floor((epochs.length - 1) / 100));
  return [...data, ...epochs, ...directory, subtype, window, epochs.length];
}

/** Words of type 5: states, epochs, directory, GM, count. */
export function twoBodyStates(orbit: Orbit, epochs: readonly number[], gmKm3S2: number): number[] {
  const states = epochs.flatMap((epoch) => Array.from(orbit(epoch)));
  return [...states, ...epochs, ...every100th(epochs, Math.floor(epochs.length / 100)), gmKm3S2, epochs.length];
}

/** Words of types 2 and 3: Chebyshev fits of given degree over equal intervals, by the discrete cosine sum. */
export function chebyshev(
  orbit: Orbit,
  type: 2 | 3,
  first: number,
  interval: number,
  count: number,
  degree: number,
): number[] {
  const words: number[] = [];
  const points = degree + 1;
  for (let record = 0; record < count; record++) {
    const middle = first + (record + 0.5) * interval;
    const radius = interval / 2;
    words.push(middle, radius);
    const angles = Array.from({ length: points }, (_, j) => (Math.PI * (j + 0.5)) / points);
    const samples = angles.map((angle) => Array.from(orbit(middle + radius * Math.cos(angle))));
    for (let component = 0; component < (type === 2 ? 3 : 6); component++) {
      for (let k = 0; k <= degree; k++) {
        const sum = angles.reduce((total, angle, j) => total + samples[j][component] * Math.cos(k * angle), 0);
        words.push(((k === 0 ? 1 : 2) * sum) / points);
      }
    }
  }
  return [...words, first, interval, 2 + (type === 2 ? 3 : 6) * points, count];
}

/** Words of types 1 and 21 from whole records: records, epochs, directory, (dimension,) count. */
export function differenceRecords(
  records: readonly { epochTdbS: number; words: readonly number[] }[],
  dimension: number,
): number[] {
  const epochs = records.map(({ epochTdbS }) => epochTdbS);
  const data = records.flatMap(({ words }) => (dimension === 15 ? [...words] : widened(words, dimension)));
  const directory = every100th(epochs, Math.floor(epochs.length / 100));
  return [...data, ...epochs, ...directory, ...(dimension === 15 ? [] : [dimension]), records.length];
}

/** A record of 15 differences laid out for more of them: step sizes and differences filled with ones and zeros. */
function widened(words: readonly number[], dimension: number): number[] {
  const steps = [...words.slice(1, 16), ...Array<number>(dimension - 15).fill(1)];
  const rows = [0, 1, 2].map((i) => [
    ...words.slice(22 + 15 * i, 37 + 15 * i),
    ...Array<number>(dimension - 15).fill(0),
  ]);
  return [words[0], ...steps, ...words.slice(16, 22), ...rows.flat(), ...words.slice(67)];
}
