/**
 * The random numbers of an assessment. Every one is fixed by (seed, what it is for, number of the draw), so a case
 * meets the same belts whatever else stands in the assessment, and options are compared in the same belts.
 */
import type { PlanetId } from '../constants/planets.ts';
import { randomStream } from '../numeric/random.ts';

/** Offsets into a row of `BeltDraws.factors`: g, i, o, t of the electrons, then of the protons. */
export const FACTORS_PER_DRAW = 8;
export const FACTORS_PER_SPECIES = 4;

/** Shards of the random streams, one for each use. */
const SHARD_BELTS = 1;
const PLANET_ORDER: readonly PlanetId[] = ['uranus', 'neptune'];
const SHARD_STATES = 11;
const SHARD_PHASES = 12;
const SHARD_RESPONSES = 1000;

export interface BeltDraws {
  readonly draws: number;
  /** Standard normal, index draw · 8 + species · 4 + (0 g, 1 i, 2 o, 3 t). */
  readonly factors: Float64Array;
  /** Uniform, one a draw: which field model. */
  readonly fieldUniform: Float64Array;
}

/** Spread factors of the belts of one planet: shared by all cases, trajectories and options. */
function drawBelts(planet: PlanetId, seed: number, draws: number): BeltDraws {
  const factors = new Float64Array(draws * FACTORS_PER_DRAW);
  const fieldUniform = new Float64Array(draws);
  const shard = SHARD_BELTS + PLANET_ORDER.indexOf(planet);
  for (let draw = 0; draw < draws; draw++) {
    const stream = randomStream(seed, shard, draw);
    for (let k = 0; k < FACTORS_PER_DRAW; k++) factors[draw * FACTORS_PER_DRAW + k] = stream.normal();
    fieldUniform[draw] = stream.uniform();
  }
  return { draws, factors, fieldUniform };
}

/**
 * A table of random numbers with one row a draw, the first `columns` of the stream of that draw. Short rows are kept,
 * because every case asks for the same ones; long rows (many repetitions) are made as they are asked for.
 */
interface DrawRows {
  /** Fills `out` with the row of a draw. */
  rowInto(draw: number, out: Float64Array): Float64Array;
}

const KEPT_COLUMNS = 8;

function drawRows(seed: number, shard: number, draws: number, kind: 'normal' | 'uniform'): DrawRows {
  const kept = new Float64Array(draws * KEPT_COLUMNS);
  for (let draw = 0; draw < draws; draw++) {
    const stream = randomStream(seed, shard, draw);
    for (let k = 0; k < KEPT_COLUMNS; k++) kept[draw * KEPT_COLUMNS + k] = stream[kind]();
  }
  return {
    rowInto(draw, out) {
      if (out.length <= KEPT_COLUMNS) {
        for (let k = 0; k < out.length; k++) out[k] = kept[draw * KEPT_COLUMNS + k];
      } else {
        const stream = randomStream(seed, shard, draw);
        for (let k = 0; k < out.length; k++) out[k] = stream[kind]();
      }
      return out;
    },
  };
}

/** Everything random in an assessment but the statistical errors of responses. */
export interface RandomNumbers {
  readonly draws: number;
  readonly belts: Readonly<Partial<Record<PlanetId, BeltDraws>>>;
  /** Standard normal: time variation of the electrons, then of the protons, of each state of the belts. */
  readonly states: DrawRows;
  /** Uniform on [0, 1): the phase that flights share, then the phase of each flight. */
  readonly phases: DrawRows;
}

export function randomNumbers(planets: Iterable<PlanetId>, seed: number, draws: number): RandomNumbers {
  const belts: Partial<Record<PlanetId, BeltDraws>> = {};
  for (const planet of planets) belts[planet] ??= drawBelts(planet, seed, draws);
  return {
    draws,
    belts,
    states: drawRows(seed, SHARD_STATES, draws, 'normal'),
    phases: drawRows(seed, SHARD_PHASES, draws, 'uniform'),
  };
}

/** Statistical error of one response, standard normal, one a draw, the same in every case. */
export function drawResponseErrors(seed: number, draws: number, responseSha256: string): Float64Array {
  const stream = randomStream(seed, SHARD_RESPONSES, Number.parseInt(responseSha256.slice(0, 8), 16));
  return Float64Array.from({ length: draws }, () => stream.normal());
}
