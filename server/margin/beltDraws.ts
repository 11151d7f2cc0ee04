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
export function drawBelts(planet: PlanetId, seed: number, draws: number): BeltDraws {
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

/** Time variation of each state of the belts, standard normal, index draw · (2 stateCount) + 2 state + species. */
export function drawStates(seed: number, draws: number, stateCount: number): Float64Array {
  const out = new Float64Array(draws * stateCount * 2);
  for (let draw = 0; draw < draws; draw++) {
    const stream = randomStream(seed, SHARD_STATES, draw);
    for (let k = 0; k < stateCount * 2; k++) out[draw * stateCount * 2 + k] = stream.normal();
  }
  return out;
}

/** Rotation phase of each flight, uniform on [0, 1), index draw · flightCount + flight. */
export function drawPhases(seed: number, draws: number, flightCount: number): Float64Array {
  const out = new Float64Array(draws * flightCount);
  for (let draw = 0; draw < draws; draw++) {
    const stream = randomStream(seed, SHARD_PHASES, draw);
    for (let k = 0; k < flightCount; k++) out[draw * flightCount + k] = stream.uniform();
  }
  return out;
}

/** Statistical error of one response, standard normal, one a draw, the same in every case. */
export function drawResponseErrors(seed: number, draws: number, responseSha256: string): Float64Array {
  const stream = randomStream(seed, SHARD_RESPONSES, Number.parseInt(responseSha256.slice(0, 8), 16));
  return Float64Array.from({ length: draws }, () => stream.normal());
}
