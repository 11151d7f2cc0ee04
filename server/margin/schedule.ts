/** When the passes of a case happen, which of them share the state of the belts, and which phase each may meet. */
import type { FluenceArtefact } from '../fluence/types.ts';
import { SECONDS_PER_DAY } from '../units.ts';
import type { AssessedTrajectory } from './input.ts';

/** Passes within this time share their time variation. */
const SHARED_STATE_S = 30 * SECONDS_PER_DAY;

export interface Leg {
  readonly trajectory: AssessedTrajectory;
  readonly repetitions: number;
}

/** One group of passes of one repetition of one leg. */
interface PassEvent {
  readonly leg: number;
  readonly group: number;
  /** Counts (leg, repetition) pairs: events of one flight share their rotation phase. */
  readonly flight: number;
  /** Counts the states of the belts, shared within 30 days of the first pass that meets one. */
  readonly state: number;
}

interface Schedule {
  readonly events: readonly PassEvent[];
  readonly flightCount: number;
  readonly stateCount: number;
}

/**
 * All passes of a case in flight order.
 *
 * Repetition k of a leg is flown k times the span of its path later than the path itself. A state of the belts lasts
 * 30 days from the first pass that meets it; the pass after that meets a new one.
 */
export function schedulePasses(legs: readonly Leg[]): Schedule {
  const found: { leg: number; group: number; flight: number; epochTdbS: number }[] = [];
  let flightCount = 0;
  legs.forEach(({ trajectory, repetitions }, leg) => {
    const spanS = trajectory.stopTdbS - trajectory.startTdbS;
    for (let k = 0; k < repetitions; k++) {
      trajectory.fluence.groups.forEach((group, index) => {
        found.push({ leg, group: index, flight: flightCount, epochTdbS: group.startTdbS + k * spanS });
      });
      flightCount++;
    }
  });
  const order = found.map((_, i) => i).sort((a, b) => found[a].epochTdbS - found[b].epochTdbS || a - b);
  const states = new Int32Array(found.length);
  let state = -1;
  let since = Number.NEGATIVE_INFINITY;
  for (const i of order) {
    if (found[i].epochTdbS >= since + SHARED_STATE_S) {
      state++;
      since = found[i].epochTdbS;
    }
    states[i] = state;
  }
  return {
    events: found.map(({ leg, group, flight }, i) => ({ leg, group, flight, state: states[i] })),
    flightCount,
    stateCount: state + 1,
  };
}

/** The variants of one field model in order of their offset, as a distribution to draw from. */
export interface PhaseDistribution {
  readonly fieldModelId: string;
  readonly primary: boolean;
  readonly variants: readonly number[];
  readonly offsetsDeg: readonly number[];
  /** Running sum of the weights, last entry 1. */
  readonly cumulative: readonly number[];
}

/**
 * One distribution over rotation offsets per field model, the chosen model first.
 *
 * Weights are taken within each model; variants of no weight (worst phases refined between the nodes of a sweep) are
 * never drawn but stay in the list.
 */
export function phaseDistributions(artefact: FluenceArtefact): PhaseDistribution[] {
  const byModel = new Map<string, number[]>();
  artefact.variants.forEach((variant, index) => {
    const list = byModel.get(variant.fieldModelId);
    if (list === undefined) byModel.set(variant.fieldModelId, [index]);
    else list.push(index);
  });
  const all = [...byModel].map(([fieldModelId, unsorted]) => {
    const variants = unsorted.toSorted((a, b) => artefact.variants[a].offsetDeg - artefact.variants[b].offsetDeg);
    const weights = variants.map((index) => artefact.variants[index].weight);
    const sum = weights.reduce((total, weight) => total + weight, 0);
    let running = 0;
    const cumulative = weights.map((weight) => {
      running += sum > 0 ? weight / sum : 1 / weights.length;
      return running;
    });
    return {
      fieldModelId,
      primary: artefact.variants[variants[0]].primary,
      variants,
      offsetsDeg: variants.map((index) => artefact.variants[index].offsetDeg),
      cumulative,
    };
  });
  return all.toSorted((a, b) => Number(b.primary) - Number(a.primary));
}

/** The variant at a uniform deviate in [0, 1). */
export function variantAt(distribution: PhaseDistribution, uniform: number): number {
  const { cumulative, variants } = distribution;
  const target = uniform * cumulative[cumulative.length - 1];
  for (let i = 0; i < cumulative.length; i++) if (target < cumulative[i]) return variants[i];
  return variants[variants.length - 1];
}

/** The variant whose offset lies nearest on the circle. */
export function variantNearest(distribution: PhaseDistribution, offsetDeg: number): number {
  let best = 0;
  let least = Number.POSITIVE_INFINITY;
  distribution.offsetsDeg.forEach((offset, i) => {
    const apart = Math.abs(((((offset - offsetDeg) % 360) + 540) % 360) - 180);
    if (apart < least) {
      least = apart;
      best = i;
    }
  });
  return distribution.variants[best];
}

/** Whether each repetition meets a rotation phase of its own, or all share one unknown offset. */
export function independentPhases(trajectory: AssessedTrajectory): boolean {
  return trajectory.environment.phase.mode === 'sweep';
}
