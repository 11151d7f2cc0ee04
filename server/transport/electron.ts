import { ELECTRON_REST_MEV } from '../matter/index.ts';
import { LAST_STEP_START } from './generator.ts';
import { ACCOUNTED, DAMAGE, ELECTRON, type Kernel, PHOTON, POSITRON } from './kernel.ts';
import {
  BREMS_QUANTILES,
  ELASTIC_QUANTILES,
  ELECTRON_COLUMNS,
  quantilePlace,
  RANGE,
  RATE_BREMS,
  RATE_ELASTIC,
  RATE_HARD,
  RATE_MOLLER,
  SOFT_1,
  SOFT_2,
  STOPPING,
  STRAGGLING,
} from './layout.ts';
import { FRACTION_MASK, FRACTION_SCALE, inverseRowWidth, ROW_BASE, ROW_SHIFT } from './rows.ts';
import {
  azimuthCosine,
  betaOf,
  dipoleCosine,
  exponential,
  hingeAngle,
  mollerShare,
  straggled,
  turned,
} from './sampling.ts';
import { STEP_LOSS_SHARE, type TransportTables } from './tables.ts';

/** Energy left to a particle that a step has slowed to a halt, MeV: the next step ends it. */
const HALTED_MEV = 1e-9;

/** Follows an electron or positron, taken from the stack, until it is gone. What it sets free goes on the stack. */
export function followElectron(kernel: Kernel, slot: number): void {
  const { stackReal, stackInt, bits, generator, score, options, spherical, niel, longestRange } = kernel;
  const bitsFloat = bits.float;
  const bitsInt = bits.int;
  const { values } = generator;
  const { absorbMeV, cutMeV, survival } = options;
  // Depth bins may be finer than steps: a segment is scored at a random point of it.
  const binned = options.bins > 0;
  const moreBrems = options.radiativeForcing - 1;
  const { stayBelowMeV, stayRange, target } = kernel;
  const kind = stackInt[4 * slot];
  const fromPhoton = stackInt[4 * slot + 2];
  let x = stackReal[4 * slot];
  let w = stackReal[4 * slot + 1];
  let energy = stackReal[4 * slot + 2];
  let weight = stackReal[4 * slot + 3];
  let layer = stackInt[4 * slot + 1];
  let rouletted = stackInt[4 * slot + 3];
  let steps = 0;
  while (layer >= 0) {
    const tables = kernel.tables[layer];
    if (tables === null) {
      layer = kernel.cross(kind, layer, x, w, kernel.toBound(layer, x, w), energy, weight, fromPhoton, rouletted);
      x = kernel.crossedX;
      w = kernel.crossedW;
      weight = kernel.crossedWeight;
      continue;
    }
    const table = tables.electron;
    const density = kernel.density[layer];
    const low = kernel.bounds[layer];
    const high = kernel.bounds[layer + 1];
    const maxStep = kernel.maxStep[layer];
    const inTarget = layer === target;
    const mayRoulette = survival < 1 && !inTarget;
    let far = 0;
    let given = 0;
    for (;;) {
      if (generator.at > LAST_STEP_START) generator.refill();
      let draw = generator.at;
      bitsFloat[0] = energy;
      let pattern = bitsInt[0];
      let row = (pattern >> ROW_SHIFT) - ROW_BASE;
      const first = row * ELECTRON_COLUMNS;
      let fraction = (pattern & FRACTION_MASK) * FRACTION_SCALE;
      if (energy < stayBelowMeV || energy <= absorbMeV) {
        const range = table[first + ELECTRON_COLUMNS + RANGE];
        const stays =
          range < stayRange &&
          (low === 0 && spherical ? range < (high - x) * density : range < Math.min(x - low, high - x) * density);
        if (stays || energy <= absorbMeV) {
          given += weight * energy;
          if (binned) kernel.depositBin(x, weight * energy);
          kernel.charge(x, kind === ELECTRON ? weight : -weight);
          if (kind === POSITRON) annihilate(kernel, x, weight, layer);
          kernel.deposit(layer, given, fromPhoton);
          layer = -1;
          break;
        }
      }
      if (mayRoulette && rouletted === 0) {
        const gap = Math.min(
          kernel.lowToTarget[layer] + (x - low) * density,
          kernel.highToTarget[layer] + (high - x) * density,
        );
        if (longestRange[row + 1] < gap) {
          if (values[draw++] > survival) {
            generator.at = draw;
            kernel.deposit(layer, given, fromPhoton);
            layer = -1;
            break;
          }
          weight /= survival;
          rouletted = 1;
        }
      }
      steps += 1;
      const stopping =
        table[first + STOPPING] + fraction * (table[first + ELECTRON_COLUMNS + STOPPING] - table[first + STOPPING]);
      let path = (STEP_LOSS_SHARE * energy) / stopping;
      if (path > maxStep) path = maxStep;
      // The rate of hard events, on the straight line through its row, where it gives their mean distance: half way along
      // the longest step where they are rare, one free path ahead where they are many.
      const hardLow = table[first + RATE_HARD] + moreBrems * table[first + RATE_BREMS];
      const hardHigh =
        table[first + ELECTRON_COLUMNS + RATE_HARD] + moreBrems * table[first + ELECTRON_COLUMNS + RATE_BREMS];
      const rateHere = hardLow + fraction * (hardHigh - hardLow);
      const ahead = fraction - (stopping * inverseRowWidth(row) * path) / (2 + rateHere * path);
      // Near the cut the rate of photons falls to zero within a row: the straight line must not lead below.
      const rate = Math.max(0.5 * hardLow, hardLow + ahead * (hardHigh - hardLow));
      const free = exponential(values[draw++]) / rate;
      const hard = free < path;
      if (hard) path = free;
      // The continuous part has its rates from the middle of the step.
      bitsFloat[0] = energy - 0.5 * stopping * path;
      pattern = bitsInt[0];
      row = (pattern >> ROW_SHIFT) - ROW_BASE;
      const at = row * ELECTRON_COLUMNS;
      fraction = (pattern & FRACTION_MASK) * FRACTION_SCALE;
      const next = at + ELECTRON_COLUMNS;
      const mean = path * (table[at + STOPPING] + fraction * (table[next + STOPPING] - table[at + STOPPING]));
      const variance = path * (table[at + STRAGGLING] + fraction * (table[next + STRAGGLING] - table[at + STRAGGLING]));
      let loss = straggled(mean, variance, values[draw++]);
      if (loss > energy) loss = energy;
      const perPath = loss / path;
      const hinge = path * values[draw++];
      far = spherical ? kernel.toBound(layer, x, w) : w > 0 ? (high - x) / w : (low - x) / w;
      if (inTarget) score[DAMAGE] += weight * Math.min(path, far * density) * niel[row];
      if (far * density > hinge) {
        const moved = hinge / density;
        given += weight * hinge * perPath;
        if (binned) kernel.depositBin(x + values[draw++] * moved * w, weight * hinge * perPath);
        if (spherical) {
          const r = Math.sqrt(x * x + moved * moved + 2 * x * moved * w);
          w = (x * w + moved) / r;
          x = r;
        } else x += moved * w;
        energy -= hinge * perPath;
        const soft1 = table[at + SOFT_1] + fraction * (table[next + SOFT_1] - table[at + SOFT_1]);
        const soft2 = table[at + SOFT_2] + fraction * (table[next + SOFT_2] - table[at + SOFT_2]);
        const mu = hingeAngle(path * soft1, path * soft2, values[draw], values[draw + 1]);
        w = turned(w, 1 - 2 * mu, azimuthCosine(values[draw + 2]));
        draw += 3;
        const rest = path - hinge;
        far = spherical ? kernel.toBound(layer, x, w) : w > 0 ? (high - x) / w : (low - x) / w;
        if (far * density > rest) {
          const onward = rest / density;
          given += weight * rest * perPath;
          if (binned) kernel.depositBin(x + values[draw++] * onward * w, weight * rest * perPath);
          if (spherical) {
            const r = Math.sqrt(x * x + onward * onward + 2 * x * onward * w);
            w = (x * w + onward) / r;
            x = r;
          } else x += onward * w;
          energy -= rest * perPath;
          if (energy < HALTED_MEV) energy = HALTED_MEV;
          generator.at = draw;
          if (!hard || energy <= absorbMeV) continue;
          // Which hard event: by the rates its distance was drawn from.
          const pick = values[draw++] * rate;
          const elastic =
            table[first + RATE_ELASTIC] +
            ahead * (table[first + ELECTRON_COLUMNS + RATE_ELASTIC] - table[first + RATE_ELASTIC]);
          bitsFloat[0] = energy;
          pattern = bitsInt[0];
          row = (pattern >> ROW_SHIFT) - ROW_BASE;
          if (values[draw++] < (pattern & FRACTION_MASK) * FRACTION_SCALE) row += 1;
          if (pick < elastic) {
            const place = quantilePlace(values[draw++]);
            const k = place | 0;
            const base = row * ELASTIC_QUANTILES + k;
            const lower = tables.elasticQuantiles[base];
            const inverse = lower + (place - k) * (tables.elasticQuantiles[base + 1] - lower);
            const turn = 1 / inverse - tables.screening[row];
            w = turned(w, 1 - 2 * (turn < 0 ? 0 : turn > 1 ? 1 : turn), azimuthCosine(values[draw++]));
            generator.at = draw;
            continue;
          }
          generator.at = draw;
          const moller =
            table[first + RATE_MOLLER] +
            ahead * (table[first + ELECTRON_COLUMNS + RATE_MOLLER] - table[first + RATE_MOLLER]);
          if (pick < elastic + moller) {
            if (energy <= 2 * cutMeV) continue;
            const passed = mollerShare(energy, cutMeV / energy, generator) * energy;
            const kept = energy - passed;
            const pairSum = energy + 2 * ELECTRON_REST_MEV;
            const cosKept = Math.sqrt((kept * pairSum) / (energy * (kept + 2 * ELECTRON_REST_MEV)));
            const cosPassed = Math.sqrt((passed * pairSum) / (energy * (passed + 2 * ELECTRON_REST_MEV)));
            const azimuth = azimuthCosine(generator.next());
            kernel.charge(x, -weight);
            kernel.push(ELECTRON, x, turned(w, cosPassed, -azimuth), passed, weight, layer, fromPhoton, rouletted);
            w = turned(w, cosKept, azimuth);
            energy = kept;
          } else if (energy > cutMeV) energy -= radiate(kernel, tables, row, x, w, energy, weight, layer);
          continue;
        }
      }
      given += weight * far * density * perPath;
      if (binned) kernel.depositBin(x + values[draw++] * far * w, weight * far * density * perPath);
      energy -= far * density * perPath;
      if (energy < HALTED_MEV) energy = HALTED_MEV;
      generator.at = draw;
      kernel.deposit(layer, given, fromPhoton);
      layer = kernel.cross(kind, layer, x, w, far, energy, weight, fromPhoton, rouletted);
      x = kernel.crossedX;
      w = kernel.crossedW;
      weight = kernel.crossedWeight;
      break;
    }
  }
  kernel.steps += steps;
}

/**
 * Emits bremsstrahlung. With forced radiation every event sends out a photon of a fraction of the weight, more often of
 * those that penetrate, and one event in so many takes its energy from the electron.
 *
 * @returns what the electron loses, MeV
 */
function radiate(
  kernel: Kernel,
  tables: TransportTables,
  row: number,
  x: number,
  w: number,
  energy: number,
  weight: number,
  layer: number,
): number {
  const { generator, options, kerma } = kernel;
  const forcing = options.radiativeForcing;
  const analog = photonEnergy(tables, row, energy, generator.next());
  if (!options.photons) {
    kernel.score[ACCOUNTED] += weight * analog;
    return analog;
  }
  let photon = analog;
  let share = weight;
  if (forcing > 1) {
    const u = generator.next();
    const place = u < UNIFORM_SHARE ? u / UNIFORM_SHARE : ((u - UNIFORM_SHARE) / (1 - UNIFORM_SHARE)) ** (1 / 8);
    photon = photonEnergy(tables, row, energy, place);
    share = weight / (forcing * (UNIFORM_SHARE + (1 - UNIFORM_SHARE) * 8 * place ** 7));
  }
  const beta = betaOf(energy);
  kerma?.radiated(layer, x, w, beta, photon, share);
  const cosine = turned(w, dipoleCosine(beta, generator.next()), azimuthCosine(generator.next()));
  kernel.push(PHOTON, x, cosine, photon, share, layer, 1, 0);
  return forcing === 1 || generator.next() * forcing < 1 ? analog : 0;
}

/** Share of forced photons drawn from the spectrum as it is; the others crowd towards its upper end. */
const UNIFORM_SHARE = 0.2;

/** Energy of the photon at a share of the spectrum, ascending, MeV. */
function photonEnergy(tables: TransportTables, row: number, energy: number, share: number): number {
  const place = share * (BREMS_QUANTILES - 1);
  const k = Math.min(place | 0, BREMS_QUANTILES - 2);
  const base = row * BREMS_QUANTILES + k;
  const low = tables.bremsQuantiles[base];
  return Math.min(energy, Math.exp(low + (place - k) * (tables.bremsQuantiles[base + 1] - low)));
}

/** A positron at rest ends in two photons back to back. */
function annihilate(kernel: Kernel, x: number, weight: number, layer: number): void {
  if (!kernel.options.photons) {
    kernel.score[ACCOUNTED] += 2 * weight * ELECTRON_REST_MEV;
    return;
  }
  const w = 2 * kernel.generator.next() - 1;
  kernel.kerma?.isotropic(layer, x, ELECTRON_REST_MEV, 2 * weight);
  kernel.push(PHOTON, x, w, ELECTRON_REST_MEV, weight, layer, 1, 0);
  kernel.push(PHOTON, x, -w, ELECTRON_REST_MEV, weight, layer, 1, 0);
}
