import { type MagneticLabeller, makeLabel, type UntrappedReason } from '../field/index.ts';
import type { BeltModel } from '../flux/types.ts';
import { bodyAxesInto, type RotationModel, rotateInto } from '../frames/rotation.ts';
import { ELECTRON_EDGES_MEV, PROTON_EDGES_MEV } from '../numeric/spectrumGrid.ts';
import type { Path } from '../trajectory/path.ts';
import type { Pass } from './passes.ts';

const N_ELECTRON = ELECTRON_EDGES_MEV.length;
const N_PROTON = PROTON_EDGES_MEV.length;

/** Flux at one instant of the path. Spectra at the edges of the energy grids, cm⁻² s⁻¹ MeV⁻¹. */
export interface PathSample {
  readonly epochTdbS: number;
  readonly lShell: number;
  readonly reason: UntrappedReason;
  readonly electron: Float64Array;
  readonly proton: Float64Array;
  /** Integral fluxes that steer the step, cm⁻² s⁻¹. */
  readonly measures: Float64Array;
  /** Quadrature weight, s. */
  weightS: number;
}

export interface FollowOptions {
  /** Allowed relative error of each steering integral; the default keeps every fluence well within 0.5 %. */
  readonly tolerance?: number;
}

/** Thresholds of the steering integrals, MeV. */
const ELECTRON_STEERING_MEV = [0.1, 0.5, 1, 2.5, 5] as const;
const PROTON_STEERING_MEV = [0.1, 1, 10] as const;
const MEASURES = ELECTRON_STEERING_MEV.length + PROTON_STEERING_MEV.length;
const DEFAULT_TOLERANCE = 1e-3;
/** First steps: at most this share of r/v, and this angle of rotation. */
const FIRST_STEP_SHARE = 0.12;
const FIRST_STEP_ROTATION_DEG = 8;
/** An interval is never split finer than this: edges of the trapping region are sharp, their share is not. */
const SHORTEST_S = 0.5;
const MAX_ROUNDS = 40;

interface Interval {
  readonly first: PathSample;
  readonly middle: PathSample;
  readonly last: PathSample;
  /** Largest relative error over the measures, filled in when judged. */
  error: number;
}

/**
 * Samples the flux along one pass, denser where it changes, until Simpson's rule and its refinement agree.
 *
 * Every interval holds three samples; it is judged by the difference between Simpson's rule and the trapezoid of the
 * same samples (a bound, not an estimate, of Simpson's own error) in each steering integral, and the intervals that
 * carry most of the total error are halved first. Boundaries of trapping, where the flux jumps, are bisected down to
 * half a second. The work follows the flux, not the ephemeris nodes, so coarse nodes cost no accuracy.
 *
 * @returns samples in order of time with their quadrature weights
 */
export function followPass(
  path: Path,
  pass: Pass,
  rotation: RotationModel,
  offsetDeg: number,
  labeller: MagneticLabeller,
  belts: BeltModel,
  options: FollowOptions = {},
): PathSample[] {
  const tolerance = options.tolerance ?? DEFAULT_TOLERANCE;
  const sampleAt = makeSampler(path, rotation, offsetDeg, labeller, belts);
  let intervals: Interval[] = [];
  let t = pass.startTdbS;
  let first = sampleAt(t);
  const state = new Float64Array(6);
  while (t < pass.stopTdbS) {
    path.stateInto(t, state);
    const radius = Math.hypot(state[0], state[1], state[2]);
    const speed = Math.max(1e-3, Math.hypot(state[3], state[4], state[5]));
    const rotationStep = (FIRST_STEP_ROTATION_DEG / 360) * rotation.periodH * 3600;
    let next = Math.min(t + Math.min(rotationStep, (FIRST_STEP_SHARE * radius) / speed), pass.stopTdbS);
    if (pass.stopTdbS - next < 0.2 * (next - t)) next = pass.stopTdbS;
    const last = sampleAt(next);
    intervals.push({ first, middle: sampleAt(0.5 * (t + next)), last, error: 0 });
    first = last;
    t = next;
  }

  const totals = new Float64Array(MEASURES);
  for (let round = 0; round < MAX_ROUNDS; round++) {
    totals.fill(0);
    for (const interval of intervals) addSimpson(interval, totals);
    let totalError = 0;
    for (const interval of intervals) {
      interval.error = relativeError(interval, totals);
      totalError += interval.error;
    }
    if (totalError <= tolerance) break;
    const share = (0.5 * tolerance) / intervals.length;
    const next: Interval[] = [];
    let split = 0;
    for (const interval of intervals) {
      if (interval.error <= share || interval.last.epochTdbS - interval.first.epochTdbS < 2 * SHORTEST_S) {
        next.push(interval);
        continue;
      }
      split += 1;
      const { first: a, middle: m, last: b } = interval;
      next.push({ first: a, middle: sampleAt(0.5 * (a.epochTdbS + m.epochTdbS)), last: m, error: 0 });
      next.push({ first: m, middle: sampleAt(0.5 * (m.epochTdbS + b.epochTdbS)), last: b, error: 0 });
    }
    intervals = next;
    if (split === 0) break;
  }
  return weigh(intervals);
}

function makeSampler(
  path: Path,
  rotation: RotationModel,
  offsetDeg: number,
  labeller: MagneticLabeller,
  belts: BeltModel,
): (epochTdbS: number) => PathSample {
  const state = new Float64Array(6);
  const axes = new Float64Array(9);
  const body = new Float64Array(3);
  const label = makeLabel();
  const scale = 1 / labeller.model.referenceRadiusKm;
  return (epochTdbS) => {
    path.stateInto(epochTdbS, state);
    bodyAxesInto(rotation, epochTdbS, offsetDeg, axes);
    rotateInto(axes, state[0] * scale, state[1] * scale, state[2] * scale, body);
    labeller.labelInto(body[0], body[1], body[2], label);
    const electron = new Float64Array(N_ELECTRON);
    const proton = new Float64Array(N_PROTON);
    if (label.reason === null) {
      const { lShell, bNt, bMinNt, bLossNt } = label;
      belts.omnidirectionalInto('electron', lShell, bNt, bMinNt, bLossNt, ELECTRON_EDGES_MEV, electron);
      belts.omnidirectionalInto('proton', lShell, bNt, bMinNt, bLossNt, PROTON_EDGES_MEV, proton);
    }
    const measures = new Float64Array(MEASURES);
    ELECTRON_STEERING_MEV.forEach((threshold, i) => {
      measures[i] = integralAbove(ELECTRON_EDGES_MEV, electron, threshold);
    });
    PROTON_STEERING_MEV.forEach((threshold, i) => {
      measures[ELECTRON_STEERING_MEV.length + i] = integralAbove(PROTON_EDGES_MEV, proton, threshold);
    });
    return { epochTdbS, lShell: label.lShell, reason: label.reason, electron, proton, measures, weightS: 0 };
  };
}

/** ∫ above the grid edge nearest to a threshold, by the trapezoid in ln E: only steers, so the grid's own edges serve. */
function integralAbove(edges: Float64Array, differential: Float64Array, thresholdMeV: number): number {
  const step = Math.log(edges[1] / edges[0]);
  const from = Math.max(0, Math.round(Math.log(thresholdMeV / edges[0]) / step));
  let sum = 0;
  for (let i = from; i < edges.length; i++) {
    sum += (i === from || i === edges.length - 1 ? 0.5 : 1) * differential[i] * edges[i];
  }
  return sum * step;
}

function addSimpson({ first, middle, last }: Interval, totals: Float64Array): void {
  const sixth = (last.epochTdbS - first.epochTdbS) / 6;
  for (let i = 0; i < MEASURES; i++) {
    totals[i] += sixth * (first.measures[i] + 4 * middle.measures[i] + last.measures[i]);
  }
}

function relativeError({ first, middle, last }: Interval, totals: Float64Array): number {
  const length = last.epochTdbS - first.epochTdbS;
  let worst = 0;
  for (let i = 0; i < MEASURES; i++) {
    if (!(totals[i] > 0)) continue;
    const a = first.measures[i];
    const m = middle.measures[i];
    const b = last.measures[i];
    // Simpson minus trapezoid is −h/12 (a − 2m + b)·2; a smooth flux makes Simpson's own error far smaller.
    worst = Math.max(worst, (Math.abs(a - 2 * m + b) * length) / (12 * totals[i]));
  }
  return worst;
}

function weigh(intervals: readonly Interval[]): PathSample[] {
  const samples: PathSample[] = [];
  for (const { first, middle, last } of intervals) {
    const sixth = (last.epochTdbS - first.epochTdbS) / 6;
    if (samples[samples.length - 1] !== first) samples.push(first);
    samples.push(middle, last);
    first.weightS += sixth;
    middle.weightS += 4 * sixth;
    last.weightS += sixth;
  }
  return samples;
}
