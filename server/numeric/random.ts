/**
 * Seeded random streams. A stream is fixed by (seed, shard, index), so that a result does not depend on how work is
 * shared out between workers.
 *
 * Generator: sfc32 (Chris Doty-Humphrey, PractRand; 128-bit state, public domain), state filled by SplitMix32-style
 * mixing of the three keys and 15 discarded draws, as its author advises.
 */
export interface RandomStream {
  /** Uniform on [0, 1), 32 bits. */
  uniform(): number;
  /** Standard normal deviate (Box & Muller 1958, both values used). */
  normal(): number;
}

export function randomStream(seed: number, shard: number, index: number): RandomStream {
  const key = new Uint32Array([mix(seed), mix(shard ^ 0x9e3779b9), mix(index ^ 0x85ebca6b)]);
  let a = key[0];
  let b = key[1];
  let c = key[2];
  let counter = 1;
  let spare = Number.NaN;

  function next(): number {
    const t = (((a + b) | 0) + counter) | 0;
    counter = (counter + 1) | 0;
    a = b ^ (b >>> 9);
    b = (c + (c << 3)) | 0;
    c = (c << 21) | (c >>> 11);
    c = (c + t) | 0;
    return t >>> 0;
  }
  for (let i = 0; i < 15; i++) next();

  return {
    uniform: () => next() / 4294967296,
    normal() {
      if (!Number.isNaN(spare)) {
        const value = spare;
        spare = Number.NaN;
        return value;
      }
      const radius = Math.sqrt(-2 * Math.log((next() + 1) / 4294967296));
      const angle = (2 * Math.PI * next()) / 4294967296;
      spare = radius * Math.sin(angle);
      return radius * Math.cos(angle);
    },
  };
}

/** Finaliser of MurmurHash3 (Austin Appleby, public domain): spreads neighbouring keys over all 32 bits. */
function mix(key: number): number {
  let h = key | 0;
  h = Math.imul(h ^ (h >>> 16), 0x85ebca6b);
  h = Math.imul(h ^ (h >>> 13), 0xc2b2ae35);
  return (h ^ (h >>> 16)) >>> 0;
}
