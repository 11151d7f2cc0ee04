import { ELECTRON_REST_MEV, nielSilicon } from '../matter/index.ts';
import { Generator } from './generator.ts';
import type { TransportGeometry, TransportOptions } from './geometry.ts';
import {
  BREMS_QUANTILES,
  ELASTIC_QUANTILES,
  ELECTRON_COLUMNS,
  PHOTON_COLUMNS,
  RANGE,
  RATE_BOUND,
  RATE_BREMS,
  RATE_ELASTIC,
  RATE_MOLLER,
  SOFT_1,
  SOFT_2,
  STOPPING,
  STRAGGLING,
} from './layout.ts';
import { FRACTION_MASK, FRACTION_SCALE, makeBits, ROW_BASE, ROW_COUNT, ROW_SHIFT, rowEnergyMeV } from './rows.ts';
import { STEP_LOSS_SHARE, type TransportTables, transportTables } from './tables.ts';

export const ELECTRON = 0;
export const POSITRON = 1;
export const PHOTON = 2;
const STACK_SIZE = 4096;
/** Particles leaving are counted above this energy, MeV. */
const COUNT_ABOVE_MEV = 0.005;
const COSINES = 8192;
const COSINE = Float64Array.from({ length: COSINES }, (_, i) => Math.cos((2 * Math.PI * (i + 0.5)) / COSINES));
/** Steps in a layer are at most this share of its thickness in the target, so that its curved tracks are resolved. */
const TARGET_STEP_SHARE = 0.2;

/** Slots of `score`, each per history. */
export const DIRECT = 0;
export const FROM_PHOTONS = 1;
export const CROSSING = 2;
export const DAMAGE = 3;
export const BACK_NUMBER = 4;
export const BACK_ENERGY = 5;
export const THROUGH_NUMBER = 6;
export const THROUGH_ENERGY = 7;
/** All energy that left or was deposited, rest energy of escaping positrons included. */
export const ACCOUNTED = 8;
export const SCORES = 9;

/**
 * Electron-photon histories in layers with one coordinate: depth in slabs, radius in spheres. Mixed scheme: collisions
 * beyond a cut in angle or loss one by one, the rest as a continuous loss with straggling and one deflection at a random
 * point of each step that carries the first two transport moments (random hinge).
 *
 * Positrons scatter and lose energy like electrons and annihilate at rest. Atoms are taken free and at rest: no
 * fluorescence, no coherent photon scattering.
 *
 * @source Møller (1932); Klein & Nishina (1929); Koch & Motz (1959); random hinge: Fernández-Varea et al. (1993),
 * Nucl. Instrum. Meth. B 73, 447; photoelectron angles: Sauter (1931)
 */
export class Kernel {
  readonly generator = new Generator();
  /** Sums of the history that runs, shape (SCORES,). */
  readonly score = new Float64Array(SCORES);
  /** Deposits by depth bin and net charge by depth bin of the history that runs. */
  readonly binEnergy: Float64Array;
  readonly binCharge: Float64Array;
  /** Counts steps of charged particles, for timing. */
  steps = 0;
  private readonly spherical: boolean;
  private readonly target: number;
  private readonly layerCount: number;
  private readonly tables: (TransportTables | null)[];
  private readonly bounds: Float64Array;
  private readonly density: Float64Array;
  private readonly importance: Float64Array;
  private readonly forcing: Float64Array;
  private readonly maxStep: Float64Array;
  /** Areal density from each layer's lower and upper bound to the target, g/cm². */
  private readonly lowToTarget: Float64Array;
  private readonly highToTarget: Float64Array;
  /** Longest range at each row among the materials, and NIEL in silicon. */
  private readonly longestRange = new Float64Array(ROW_COUNT);
  private readonly niel = new Float64Array(ROW_COUNT);
  private readonly options: TransportOptions;
  private readonly binScale: number;
  private readonly bits = makeBits();
  private readonly stackReal = new Float64Array(STACK_SIZE * 4);
  private readonly stackInt = new Int32Array(STACK_SIZE * 4);
  private depth = 0;
  /** Photons that leave are counted beside charged particles in histories of photons only. */
  private countPhotons = false;

  constructor(geometry: TransportGeometry, options: TransportOptions) {
    const { layers } = geometry;
    const n = layers.length;
    this.spherical = geometry.spherical;
    this.target = geometry.target;
    this.layerCount = n;
    this.options = options;
    this.tables = layers.map((layer) =>
      layer.material === null ? null : transportTables(layer.material, options.cutMeV),
    );
    this.bounds = new Float64Array(n + 1);
    for (let i = 0; i < n; i++) this.bounds[i + 1] = this.bounds[i] + layers[i].thickness;
    this.density = Float64Array.from(layers, ({ material }) =>
      geometry.spherical ? (material?.densityGPerCm3 ?? 0) : 1,
    );
    this.importance = Float64Array.from(layers, (layer) => layer.importance);
    this.forcing = Float64Array.from(layers, (layer) => layer.forcing);
    this.maxStep = Float64Array.from(layers, (layer, i) =>
      i === geometry.target ? TARGET_STEP_SHARE * layer.thickness * this.density[i] : Number.POSITIVE_INFINITY,
    );
    this.lowToTarget = new Float64Array(n);
    this.highToTarget = new Float64Array(n);
    for (let i = 0; i < n; i++) {
      let between = 0;
      for (let k = Math.min(i, geometry.target) + 1; k < Math.max(i, geometry.target); k++) {
        between += layers[k].thickness * this.density[k];
      }
      this.lowToTarget[i] = i > geometry.target ? between : Number.POSITIVE_INFINITY;
      this.highToTarget[i] = i < geometry.target ? between : Number.POSITIVE_INFINITY;
    }
    for (let row = 0; row < ROW_COUNT; row++) {
      for (const table of this.tables) {
        if (table !== null) {
          this.longestRange[row] = Math.max(this.longestRange[row], table.electron[row * ELECTRON_COLUMNS + RANGE]);
        }
      }
      this.niel[row] = nielSilicon('electron', rowEnergyMeV(row));
    }
    this.binEnergy = new Float64Array(Math.max(1, options.bins));
    this.binCharge = new Float64Array(Math.max(1, options.bins));
    this.binScale = options.bins / this.bounds[n];
  }

  /**
   * One history of a particle that enters from outside; `score` and the bins then hold it alone.
   *
   * @param cosine - cosine to the inward normal, in (0, 1]
   * @param weight - of the particle, when the source draws it more or less often than in nature
   */
  history(kind: number, energyMeV: number, cosine: number, weight = 1): void {
    this.score.fill(0);
    if (this.options.bins > 0) {
      this.binEnergy.fill(0);
      this.binCharge.fill(0);
    }
    const last = this.layerCount - 1;
    this.countPhotons = kind === PHOTON;
    this.depth = 0;
    if (this.spherical) this.push(kind, this.bounds[last + 1], -cosine, energyMeV, weight, last, 0, 0);
    else this.push(kind, 0, cosine, energyMeV, weight, 0, 0, 0);
    while (this.depth > 0) {
      this.depth -= 1;
      if (this.stackInt[4 * this.depth] === PHOTON) this.followPhoton(this.depth);
      else this.followElectron(this.depth);
    }
  }

  private push(
    kind: number,
    x: number,
    w: number,
    energy: number,
    weight: number,
    layer: number,
    fromPhoton: number,
    rouletted: number,
  ): void {
    const at = 4 * this.depth;
    if (this.depth >= STACK_SIZE) throw new Error('particle stack is full');
    const { stackReal, stackInt } = this;
    stackReal[at] = x;
    stackReal[at + 1] = w;
    stackReal[at + 2] = energy;
    stackReal[at + 3] = weight;
    stackInt[at] = kind;
    stackInt[at + 1] = layer;
    stackInt[at + 2] = fromPhoton;
    stackInt[at + 3] = rouletted;
    this.depth += 1;
  }

  private deposit(layer: number, x: number, energy: number, fromPhoton: number): void {
    const { score } = this;
    score[ACCOUNTED] += energy;
    if (layer === this.target) score[fromPhoton] += energy;
    if (this.options.bins > 0) this.binEnergy[this.bin(x)] += energy;
  }

  private bin(x: number): number {
    const k = (x * this.binScale) | 0;
    return k < this.options.bins ? k : this.options.bins - 1;
  }

  private charge(x: number, amount: number): void {
    if (this.options.bins > 0) this.binCharge[this.bin(x)] += amount;
  }

  /** Distance to the next bound, cm in spheres and g/cm² in slabs. */
  private toBound(layer: number, x: number, w: number): number {
    const { bounds } = this;
    if (!this.spherical) {
      if (w > 0) return Math.max(0, (bounds[layer + 1] - x) / w);
      return w < 0 ? Math.max(0, (bounds[layer] - x) / w) : Number.POSITIVE_INFINITY;
    }
    const across = x * x * (w * w - 1);
    if (w < 0) {
      const inner = bounds[layer];
      const root = across + inner * inner;
      if (inner > 0 && root > 0) return Math.max(0, -x * w - Math.sqrt(root));
    }
    const outer = bounds[layer + 1];
    return Math.max(0, -x * w + Math.sqrt(Math.max(0, across + outer * outer)));
  }

  /** Whether the next bound lies inward (lower coordinate). */
  private inward(layer: number, x: number, w: number): boolean {
    if (w >= 0) return false;
    if (!this.spherical) return true;
    const inner = this.bounds[layer];
    return inner > 0 && x * x * (w * w - 1) + inner * inner > 0;
  }

  /** Leaves through the outside: what is counted there. */
  private leave(kind: number, through: boolean, energy: number, weight: number): void {
    const { score } = this;
    const rest = kind === POSITRON ? 2 * ELECTRON_REST_MEV : 0;
    score[ACCOUNTED] += weight * (energy + rest);
    if (energy > COUNT_ABOVE_MEV && (kind !== PHOTON || this.countPhotons)) {
      score[through ? THROUGH_NUMBER : BACK_NUMBER] += weight;
      score[through ? THROUGH_ENERGY : BACK_ENERGY] += weight * energy;
    }
  }

  private followElectron(slot: number): void {
    const { stackReal, stackInt, bits, generator, score, options } = this;
    let x = stackReal[4 * slot];
    let w = stackReal[4 * slot + 1];
    let energy = stackReal[4 * slot + 2];
    let weight = stackReal[4 * slot + 3];
    const kind = stackInt[4 * slot];
    let layer = stackInt[4 * slot + 1];
    const fromPhoton = stackInt[4 * slot + 2];
    let rouletted = stackInt[4 * slot + 3];
    const { absorbMeV, cutMeV, survival } = options;
    // Depth bins may be finer than steps: a segment is scored at a random point of it.
    const binned = options.bins > 0;
    let steps = 0;
    for (;;) {
      const tables = this.tables[layer];
      const density = this.density[layer];
      let path = 0;
      let far = this.toBound(layer, x, w);
      let crossed = tables === null;
      if (tables !== null) {
        if (energy <= absorbMeV) {
          this.deposit(layer, x, weight * energy, fromPhoton);
          this.charge(x, kind === ELECTRON ? weight : -weight);
          if (kind === POSITRON) this.annihilate(x, weight, layer);
          break;
        }
        const table = tables.electron;
        bits.float[0] = energy;
        let pattern = bits.int[0];
        let at = ((pattern >> ROW_SHIFT) - ROW_BASE) * ELECTRON_COLUMNS;
        let fraction = (pattern & FRACTION_MASK) * FRACTION_SCALE;
        if (survival < 1 && rouletted === 0 && layer !== this.target) {
          const row = at / ELECTRON_COLUMNS;
          const range = this.longestRange[row + 1];
          const gap = Math.min(
            this.lowToTarget[layer] + (x - this.bounds[layer]) * density,
            this.highToTarget[layer] + (this.bounds[layer + 1] - x) * density,
          );
          if (range < gap) {
            if (generator.next() > survival) {
              break;
            }
            weight /= survival;
            rouletted = 1;
          }
        }
        steps += 1;
        const bound = table[at + RATE_BOUND];
        const stopping =
          table[at + STOPPING] + fraction * (table[at + ELECTRON_COLUMNS + STOPPING] - table[at + STOPPING]);
        path = -Math.log(generator.next()) / bound;
        let longest = (STEP_LOSS_SHARE * energy) / stopping;
        if (longest > this.maxStep[layer]) longest = this.maxStep[layer];
        let hard = true;
        if (path > longest) {
          path = longest;
          hard = false;
        }
        // Rates of the continuous part at the middle of the step.
        bits.float[0] = energy - 0.5 * stopping * path;
        pattern = bits.int[0];
        at = ((pattern >> ROW_SHIFT) - ROW_BASE) * ELECTRON_COLUMNS;
        fraction = (pattern & FRACTION_MASK) * FRACTION_SCALE;
        const next = at + ELECTRON_COLUMNS;
        let loss = path * (table[at + STOPPING] + fraction * (table[next + STOPPING] - table[at + STOPPING]));
        const variance =
          path * (table[at + STRAGGLING] + fraction * (table[next + STRAGGLING] - table[at + STRAGGLING]));
        loss = straggled(loss, variance, generator.next());
        if (loss > energy) loss = energy;
        const perPath = loss / path;
        const hinge = path * generator.next();
        if (layer === this.target) {
          const row = at / ELECTRON_COLUMNS;
          score[DAMAGE] += weight * Math.min(path, far * density) * this.niel[row];
        }
        if (far * density <= hinge) {
          crossed = true;
          path = far * density;
        } else {
          const moved = hinge / density;
          const spot = binned ? x + generator.next() * moved * w : x;
          if (this.spherical) {
            const r = Math.sqrt(x * x + moved * moved + 2 * x * moved * w);
            w = (x * w + moved) / r;
            x = r;
          } else x += moved * w;
          this.deposit(layer, spot, weight * hinge * perPath, fromPhoton);
          energy -= hinge * perPath;
          const soft1 = table[at + SOFT_1] + fraction * (table[next + SOFT_1] - table[at + SOFT_1]);
          const soft2 = table[at + SOFT_2] + fraction * (table[next + SOFT_2] - table[at + SOFT_2]);
          const mu = hingeAngle(path * soft1, path * soft2, generator.next(), generator.next());
          w = turned(w, 1 - 2 * mu, COSINE[(generator.next() * COSINES) | 0]);
          const rest = path - hinge;
          far = this.toBound(layer, x, w);
          if (far * density <= rest) {
            crossed = true;
            path = far * density;
          } else {
            const onward = rest / density;
            const spot = binned ? x + generator.next() * onward * w : x;
            if (this.spherical) {
              const r = Math.sqrt(x * x + onward * onward + 2 * x * onward * w);
              w = (x * w + onward) / r;
              x = r;
            } else x += onward * w;
            this.deposit(layer, spot, weight * rest * perPath, fromPhoton);
            energy -= rest * perPath;
            if (energy < 1e-9) energy = 1e-9;
          }
        }
        if (crossed) {
          this.deposit(layer, binned ? x + generator.next() * far * w : x, weight * path * perPath, fromPhoton);
          energy -= path * perPath;
          if (energy < 1e-9) energy = 1e-9;
        } else {
          if (!hard || energy <= absorbMeV) continue;
          bits.float[0] = energy;
          pattern = bits.int[0];
          const row = (pattern >> ROW_SHIFT) - ROW_BASE;
          at = row * ELECTRON_COLUMNS;
          fraction = (pattern & FRACTION_MASK) * FRACTION_SCALE;
          const up = at + ELECTRON_COLUMNS;
          let pick = generator.next() * bound;
          const elastic = table[at + RATE_ELASTIC] + fraction * (table[up + RATE_ELASTIC] - table[at + RATE_ELASTIC]);
          if (pick < elastic) {
            const drawn = generator.next() < fraction ? row + 1 : row;
            const q = generator.next() * (ELASTIC_QUANTILES - 1);
            const k = q | 0;
            const base = drawn * ELASTIC_QUANTILES + k;
            const low = tables.elasticQuantiles[base];
            const inverse = low + (q - k) * (tables.elasticQuantiles[base + 1] - low);
            const mu = Math.min(1, Math.max(0, 1 / inverse - tables.screening[drawn]));
            w = turned(w, 1 - 2 * mu, COSINE[(generator.next() * COSINES) | 0]);
            continue;
          }
          pick -= elastic;
          const moller = table[at + RATE_MOLLER] + fraction * (table[up + RATE_MOLLER] - table[at + RATE_MOLLER]);
          if (pick < moller) {
            if (energy <= 2 * cutMeV) continue;
            const share = mollerShare(energy, cutMeV / energy, generator);
            const given = share * energy;
            const kept = energy - given;
            const pairSum = energy + 2 * ELECTRON_REST_MEV;
            const cosKept = Math.sqrt((kept * pairSum) / (energy * (kept + 2 * ELECTRON_REST_MEV)));
            const cosGiven = Math.sqrt((given * pairSum) / (energy * (given + 2 * ELECTRON_REST_MEV)));
            const azimuth = COSINE[(generator.next() * COSINES) | 0];
            const wGiven = turned(w, cosGiven, -azimuth);
            w = turned(w, cosKept, azimuth);
            energy = kept;
            this.charge(x, -weight);
            this.push(ELECTRON, x, wGiven, given, weight, layer, fromPhoton, rouletted);
            continue;
          }
          pick -= moller;
          const brems = table[at + RATE_BREMS] + fraction * (table[up + RATE_BREMS] - table[at + RATE_BREMS]);
          if (pick < brems) {
            if (energy <= cutMeV) continue;
            this.radiate(tables, generator.next() < fraction ? row + 1 : row, x, w, energy, weight, layer);
            energy -= this.radiated;
          }
          continue;
        }
      }
      // At a bound: into the next layer, or out.
      if (this.inward(layer, x, w)) {
        w = this.atBound(x, w, far, this.bounds[layer]);
        x = this.bounds[layer];
        if (layer === 0) {
          this.leave(kind, false, energy, weight);
          break;
        }
        if (layer - 1 === this.target && this.spherical && energy > COUNT_ABOVE_MEV) score[CROSSING] += weight;
        weight = this.enter(layer, layer - 1, kind, x, w, energy, weight, fromPhoton, rouletted);
        layer -= 1;
      } else {
        w = this.atBound(x, w, far, this.bounds[layer + 1]);
        x = this.bounds[layer + 1];
        if (layer === this.layerCount - 1) {
          this.leave(kind, !this.spherical, energy, weight);
          break;
        }
        if (layer + 1 === this.target && energy > COUNT_ABOVE_MEV) score[CROSSING] += weight;
        weight = this.enter(layer, layer + 1, kind, x, w, energy, weight, fromPhoton, rouletted);
        layer += 1;
      }
      if (weight === 0) break;
    }
    this.steps += steps;
  }

  /** Cosine to the radius on arrival at a bound. */
  private atBound(x: number, w: number, path: number, bound: number): number {
    if (!this.spherical) return w;
    const arrived = (x * w + path) / bound;
    return arrived > 1 ? 1 : arrived < -1 ? -1 : arrived;
  }

  /** Splits or roulettes at a change of importance; returns the weight that goes on, 0 for none. */
  private enter(
    from: number,
    to: number,
    kind: number,
    x: number,
    w: number,
    energy: number,
    weight: number,
    fromPhoton: number,
    rouletted: number,
  ): number {
    const ratio = this.importance[to] / this.importance[from];
    if (ratio === 1) return weight;
    if (ratio < 1) return this.generator.next() < ratio ? weight / ratio : 0;
    const share = weight / ratio;
    for (let copy = 1; copy < ratio; copy++) this.push(kind, x, w, energy, share, to, fromPhoton, rouletted);
    return share;
  }

  private radiated = 0;

  private radiate(
    tables: TransportTables,
    row: number,
    x: number,
    w: number,
    energy: number,
    weight: number,
    layer: number,
  ): void {
    const { generator, options } = this;
    const split = options.photonSplit;
    // The electron loses the energy of the first photon drawn, so its own spectrum of losses is unchanged.
    for (let copy = 0; copy < split; copy++) {
      const q = generator.next() * (BREMS_QUANTILES - 1);
      const k = q | 0;
      const base = row * BREMS_QUANTILES + k;
      const low = tables.bremsQuantiles[base];
      const photon = Math.exp(low + (q - k) * (tables.bremsQuantiles[base + 1] - low));
      const drawn = photon < energy ? photon : energy;
      if (copy === 0) this.radiated = drawn;
      if (!options.photons) {
        this.score[ACCOUNTED] += (weight * drawn) / split;
        continue;
      }
      const beta = Math.sqrt(1 - 1 / (1 + energy / ELECTRON_REST_MEV) ** 2);
      const z = 2 * generator.next() - 1;
      const cosine = (z + beta) / (z * beta + 1);
      this.push(
        PHOTON,
        x,
        turned(w, cosine, COSINE[(generator.next() * COSINES) | 0]),
        drawn,
        weight / split,
        layer,
        1,
        0,
      );
    }
  }

  private annihilate(x: number, weight: number, layer: number): void {
    if (!this.options.photons) {
      this.score[ACCOUNTED] += 2 * weight * ELECTRON_REST_MEV;
      return;
    }
    const w = 2 * this.generator.next() - 1;
    this.push(PHOTON, x, w, ELECTRON_REST_MEV, weight, layer, 1, 0);
    this.push(PHOTON, x, -w, ELECTRON_REST_MEV, weight, layer, 1, 0);
  }

  private followPhoton(slot: number): void {
    const { stackReal, stackInt, bits, generator } = this;
    let x = stackReal[4 * slot];
    let w = stackReal[4 * slot + 1];
    let energy = stackReal[4 * slot + 2];
    let weight = stackReal[4 * slot + 3];
    let layer = stackInt[4 * slot + 1];
    let optical = -Math.log(generator.next());
    for (;;) {
      const tables = this.tables[layer];
      const far = this.toBound(layer, x, w);
      let total = 0;
      let compton = 0;
      let pair = 0;
      if (tables !== null) {
        if (energy <= this.options.absorbMeV) {
          this.deposit(layer, x, weight * energy, 1);
          return;
        }
        const table = tables.photon;
        bits.float[0] = energy;
        const pattern = bits.int[0];
        const at = ((pattern >> ROW_SHIFT) - ROW_BASE) * PHOTON_COLUMNS;
        const fraction = (pattern & FRACTION_MASK) * FRACTION_SCALE;
        total = table[at] + fraction * (table[at + PHOTON_COLUMNS] - table[at]);
        compton = table[at + 1] + fraction * (table[at + PHOTON_COLUMNS + 1] - table[at + 1]);
        pair = table[at + 2] + fraction * (table[at + PHOTON_COLUMNS + 2] - table[at + 2]);
      }
      const rate = total * this.density[layer] * this.forcing[layer];
      if (optical < far * rate) {
        const moved = optical / rate;
        if (this.spherical) {
          const r = Math.sqrt(x * x + moved * moved + 2 * x * moved * w);
          w = (x * w + moved) / r;
          x = r;
        } else x += moved * w;
        // Forced collisions: every one sends out its electrons at a part of the weight, one in so many is real.
        const forcing = this.forcing[layer];
        const real = forcing === 1 || generator.next() * forcing < 1;
        const share = weight / forcing;
        const pick = generator.next() * total;
        if (pick < compton) {
          this.scatter(x, w, energy, share, layer);
          if (real) {
            energy = this.photonEnergy;
            w = this.photonCosine;
          }
        } else {
          const beta = Math.sqrt(1 - 1 / (1 + energy / ELECTRON_REST_MEV) ** 2);
          if (pick < compton + pair && energy > 2 * ELECTRON_REST_MEV) {
            const kinetic = energy - 2 * ELECTRON_REST_MEV;
            const part = generator.next();
            for (let k = 0; k < 2; k++) {
              const z = 2 * generator.next() - 1;
              const direction = turned(w, (z + beta) / (z * beta + 1), COSINE[(generator.next() * COSINES) | 0]);
              const own = kinetic * (k === 0 ? part : 1 - part);
              this.push(k === 0 ? ELECTRON : POSITRON, x, direction, own, share, layer, 1, 0);
            }
          } else {
            const cosine = sauterCosine(energy, generator);
            this.charge(x, -share);
            this.push(
              ELECTRON,
              x,
              turned(w, cosine, COSINE[(generator.next() * COSINES) | 0]),
              energy,
              share,
              layer,
              1,
              0,
            );
          }
          if (real) return;
        }
        optical = -Math.log(generator.next());
        continue;
      }
      optical -= far * rate;
      const inward = this.inward(layer, x, w);
      const bound = inward ? this.bounds[layer] : this.bounds[layer + 1];
      w = this.atBound(x, w, far, bound);
      x = bound;
      const to = inward ? layer - 1 : layer + 1;
      if (to < 0 || to >= this.layerCount) {
        this.leave(PHOTON, !inward && !this.spherical, energy, weight);
        return;
      }
      weight = this.enter(layer, to, PHOTON, x, w, energy, weight, 1, 0);
      if (weight === 0) return;
      layer = to;
    }
  }

  private photonEnergy = 0;
  private photonCosine = 0;

  /** Compton scattering off a free electron at rest: the recoil is pushed, the photon left in the two fields. */
  private scatter(x: number, w: number, energy: number, weight: number, layer: number): void {
    const { generator } = this;
    const k = energy / ELECTRON_REST_MEV;
    const low = 1 / (1 + 2 * k);
    const logPart = -Math.log(low);
    const flatPart = 0.5 * (1 - low * low);
    let ratio = 1;
    let t = 0;
    for (;;) {
      ratio =
        generator.next() * (logPart + flatPart) < logPart
          ? low ** generator.next()
          : Math.sqrt(low * low + (1 - low * low) * generator.next());
      t = (1 - ratio) / (k * ratio);
      const sin2 = t * (2 - t);
      if (generator.next() < 1 - (ratio * sin2) / (1 + ratio * ratio)) break;
    }
    const cosine = 1 - t;
    const given = energy * (1 - ratio);
    const azimuth = COSINE[(generator.next() * COSINES) | 0];
    this.photonEnergy = energy * ratio;
    this.photonCosine = turned(w, cosine, azimuth);
    if (given <= 0) return;
    const momentum = Math.sqrt(given * (given + 2 * ELECTRON_REST_MEV));
    const cosElectron = Math.min(1, (energy - energy * ratio * cosine) / momentum);
    this.charge(x, -weight);
    this.push(ELECTRON, x, turned(w, cosElectron, -azimuth), given, weight, layer, 1, 0);
  }
}

/** Direction cosine after a turn by `cosine`, azimuth given by its cosine. */
function turned(w: number, cosine: number, azimuthCosine: number): number {
  const next = w * cosine + Math.sqrt(Math.max(0, (1 - w * w) * (1 - cosine * cosine))) * azimuthCosine;
  return next > 1 ? 1 : next < -1 ? -1 : next;
}

/** Loss of given mean and variance: uniform, or uniform with a part at zero where the spread exceeds the mean. */
function straggled(mean: number, variance: number, u: number): number {
  const mean2 = mean * mean;
  if (mean2 > 3 * variance) return mean + Math.sqrt(3 * variance) * (2 * u - 1);
  const none = (3 * variance - mean2) / (3 * variance + 3 * mean2);
  if (u < none) return 0;
  return (((u - none) / (1 - none)) * (3 * variance + 3 * mean2)) / (2 * mean);
}

/**
 * (1 − cos θ)/2 of a step whose soft deflections have the mean numbers t1 = s/λ1 and t2 = s/λ2: two uniform
 * distributions side by side that carry the first two moments.
 */
function hingeAngle(t1: number, t2: number, u: number, v: number): number {
  const mean = 0.5 * lostShare(t1);
  const square = mean - lostShare(t2) / 6;
  const split = (2 * mean - 3 * square) / (1 - 2 * mean);
  const lower = 1 - 2 * mean + split;
  return u < lower ? v * split : split + v * (1 - split);
}

/** 1 − exp(−t); below 0.1 by its series, to 1e-8. */
function lostShare(t: number): number {
  return t < 0.1 ? t * (1 - (t / 2) * (1 - (t / 3) * (1 - (t / 4) * (1 - t / 5)))) : -Math.expm1(-t);
}

/** Share of the energy that a Møller collision gives to the slower electron, from `cut` to one half. */
function mollerShare(energy: number, cut: number, generator: Generator): number {
  const gamma = 1 + energy / ELECTRON_REST_MEV;
  const a = ((gamma - 1) / gamma) ** 2;
  const b = (2 * gamma - 1) / (gamma * gamma);
  const top = Math.max(1, 2 + a / 4 - b);
  for (;;) {
    const e = cut / (1 - generator.next() * (1 - 2 * cut));
    const rest = e / (1 - e);
    if (generator.next() * top < 1 + rest * rest + a * e * e - b * rest) return e;
  }
}

/** Cosine of a K-shell photoelectron to its photon. */
function sauterCosine(energy: number, generator: Generator): number {
  const gamma = 1 + energy / ELECTRON_REST_MEV;
  const beta = Math.sqrt(1 - 1 / (gamma * gamma));
  const a = 1 / beta - 1;
  const half = 0.5 * beta * gamma * (gamma - 1) * (gamma - 2);
  const top = 2 * (1 / a + half);
  for (;;) {
    const u = generator.next();
    const t = ((2 * a) / ((a + 2) ** 2 - 4 * u)) * (2 * u + (a + 2) * Math.sqrt(u));
    if (generator.next() * top < (2 - t) * (1 / (a + t) + half)) return 1 - t;
  }
}
