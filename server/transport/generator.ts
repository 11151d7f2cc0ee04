/**
 * Uniform deviates for the histories: sfc32 (Chris Doty-Humphrey, PractRand; public domain) filling a buffer, so that a
 * draw is one read. The stream is fixed by three keys.
 */
const SIZE = 4096;
/** Deviates of one step are read without a test of the end; this many must be left at its start. */
const STEP_RESERVE = 16;
export const LAST_STEP_START = SIZE - STEP_RESERVE;

export class Generator {
  readonly values = new Float64Array(SIZE);
  at = SIZE;
  private readonly state = new Int32Array(4);

  /** Starts the stream (seed, shard, index) anew. */
  start(seed: number, shard: number, index: number): void {
    this.state[0] = mix(seed);
    this.state[1] = mix(shard ^ 0x9e3779b9);
    this.state[2] = mix(index ^ 0x85ebca6b);
    this.state[3] = 1;
    for (let i = 0; i < 15; i++) this.fill(1);
    this.at = SIZE;
  }

  /** Uniform on (0, 1): never 0, so that its logarithm is finite. */
  next(): number {
    if (this.at === SIZE) this.refill();
    return this.values[this.at++];
  }

  /** Fills the buffer anew and goes to its start; what was left of it is passed over. */
  refill(): void {
    this.fill(SIZE);
    this.at = 0;
  }

  private fill(count: number): void {
    let a = this.state[0];
    let b = this.state[1];
    let c = this.state[2];
    let counter = this.state[3];
    const { values } = this;
    for (let i = 0; i < count; i++) {
      const t = (((a + b) | 0) + counter) | 0;
      counter = (counter + 1) | 0;
      a = b ^ (b >>> 9);
      b = (c + (c << 3)) | 0;
      c = (c << 21) | (c >>> 11);
      c = (c + t) | 0;
      values[i] = ((t >>> 0) + 0.5) / 4294967296;
    }
    this.state[0] = a;
    this.state[1] = b;
    this.state[2] = c;
    this.state[3] = counter;
  }
}

/** Finaliser of MurmurHash3 (Austin Appleby, public domain): spreads neighbouring keys over all 32 bits. */
function mix(key: number): number {
  let h = key | 0;
  h = Math.imul(h ^ (h >>> 16), 0x85ebca6b);
  h = Math.imul(h ^ (h >>> 13), 0xc2b2ae35);
  return (h ^ (h >>> 16)) | 0;
}
