import { ELECTRON_REST_MEV } from '../matter/index.ts';
import { ELECTRON, type Kernel, PHOTON, POSITRON } from './kernel.ts';
import { PHOTON_COLUMNS, PHOTON_COMPTON, PHOTON_PAIR } from './layout.ts';
import { FRACTION_MASK, FRACTION_SCALE, ROW_BASE, ROW_SHIFT } from './rows.ts';
import { azimuthCosine, betaOf, comptonRatio, dipoleCosine, exponential, sauterCosine, turned } from './sampling.ts';

/** Share of the electrons set free by photons that are followed where the dose of photons counts by expectation. */
const FOLLOWED_SHARE = 0.25;

/** What a photon on the stack is in the middle of. */
const NEW_FLIGHT = 0;
const UNTRACKED = 1;
const TRACKED = 2;

/** Follows a photon, taken from the stack, until it is gone. The electrons it sets free go on the stack. */
export function followPhoton(kernel: Kernel, slot: number): void {
  const { stackReal, stackInt, bits, generator, spherical, kerma } = kernel;
  let x = stackReal[4 * slot];
  let w = stackReal[4 * slot + 1];
  let energy = stackReal[4 * slot + 2];
  let weight = stackReal[4 * slot + 3];
  let layer = stackInt[4 * slot + 1];
  let optical = exponential(generator.next());
  // Copies made at a bound go on with a flight that is counted already.
  const state = stackInt[4 * slot + 3];
  if (state === NEW_FLIGHT) kerma?.flight(layer, x, w, energy, weight);
  let tracked = state === NEW_FLIGHT ? (kerma?.near(x) ?? false) : state === TRACKED;
  kernel.flights += 1;
  while (layer >= 0) {
    const tables = kernel.tables[layer];
    const far = kernel.toBound(layer, x, w);
    let total = 0;
    let compton = 0;
    let pair = 0;
    if (tables !== null) {
      if (energy <= kernel.options.absorbMeV) {
        kernel.deposit(layer, weight * energy, 1);
        if (kernel.options.bins > 0) kernel.depositBin(x, weight * energy);
        return;
      }
      const table = tables.photon;
      bits.float[0] = energy;
      const pattern = bits.int[0];
      const at = ((pattern >> ROW_SHIFT) - ROW_BASE) * PHOTON_COLUMNS;
      const fraction = (pattern & FRACTION_MASK) * FRACTION_SCALE;
      const next = at + PHOTON_COLUMNS;
      total = table[at] + fraction * (table[next] - table[at]);
      compton = table[at + PHOTON_COMPTON] + fraction * (table[next + PHOTON_COMPTON] - table[at + PHOTON_COMPTON]);
      pair = table[at + PHOTON_PAIR] + fraction * (table[next + PHOTON_PAIR] - table[at + PHOTON_PAIR]);
    }
    const forcing = kernel.forcing[layer];
    const rate = total * kernel.density[layer] * forcing;
    if (optical >= far * rate) {
      if (tracked && kerma !== null && layer === kernel.target) {
        kerma.tracked(energy, weight, far * kernel.density[layer]);
      }
      optical -= far * rate;
      layer = kernel.cross(PHOTON, layer, x, w, far, energy, weight, 1, tracked ? TRACKED : UNTRACKED);
      x = kernel.crossedX;
      w = kernel.crossedW;
      weight = kernel.crossedWeight;
      continue;
    }
    const moved = optical / rate;
    if (tracked && kerma !== null && layer === kernel.target) {
      kerma.tracked(energy, weight, moved * kernel.density[layer]);
    }
    if (spherical) {
      const r = Math.sqrt(x * x + moved * moved + 2 * x * moved * w);
      w = (x * w + moved) / r;
      x = r;
    } else x += moved * w;
    // Forced collisions: every one sends out its electrons at a part of the weight, one in so many is real.
    const real = forcing === 1 || generator.next() * forcing < 1;
    const share = weight / forcing;
    const pick = generator.next() * total;
    if (pick < compton) {
      kerma?.scattered(layer, x, w, energy, share);
      const ratio = comptonRatio(energy, generator);
      const cosine = 1 - ((1 - ratio) * ELECTRON_REST_MEV) / (energy * ratio);
      const given = energy * (1 - ratio);
      const azimuth = azimuthCosine(generator.next());
      if (given > 0) {
        const momentum = Math.sqrt(given * (given + 2 * ELECTRON_REST_MEV));
        const cosElectron = Math.min(1, (energy - energy * ratio * cosine) / momentum);
        setFree(kernel, ELECTRON, x, turned(w, cosElectron, -azimuth), given, share, layer);
      }
      if (real) {
        energy *= ratio;
        w = turned(w, cosine, azimuth);
      }
    } else if (pick < compton + pair && energy > 2 * ELECTRON_REST_MEV) {
      const kinetic = energy - 2 * ELECTRON_REST_MEV;
      const part = generator.next();
      const beta = betaOf(energy);
      for (let k = 0; k < 2; k++) {
        const cosine = turned(w, dipoleCosine(beta, generator.next()), azimuthCosine(generator.next()));
        const own = kinetic * (k === 0 ? part : 1 - part);
        setFree(kernel, k === 0 ? ELECTRON : POSITRON, x, cosine, own, share, layer);
      }
      if (real) return;
    } else {
      const cosine = turned(w, sauterCosine(energy, generator), azimuthCosine(generator.next()));
      setFree(kernel, ELECTRON, x, cosine, energy, share, layer);
      if (real) return;
    }
    optical = exponential(generator.next());
    if (real) {
      kerma?.flight(layer, x, w, energy, weight);
      tracked = kerma?.near(x) ?? false;
      kernel.flights += 1;
    }
  }
}

/** Puts a charged particle that a photon set free on the stack; an electron leaves a positive charge behind. */
function setFree(
  kernel: Kernel,
  kind: number,
  x: number,
  w: number,
  energy: number,
  weight: number,
  layer: number,
): void {
  if (kind === ELECTRON) kernel.charge(x, -weight);
  else kernel.charge(x, weight);
  if (kernel.kerma === null) {
    kernel.push(kind, x, w, energy, weight, layer, 1, 0);
    return;
  }
  // Its own deposits count already; what it radiates does not.
  if (kernel.generator.next() < FOLLOWED_SHARE) kernel.push(kind, x, w, energy, weight / FOLLOWED_SHARE, layer, 1, 1);
}
