import { ELECTRON_REST_MEV, nielSilicon } from '../matter/index.ts';
import { followElectron } from './electron.ts';
import { Generator } from './generator.ts';
import type { TransportGeometry, TransportOptions } from './geometry.ts';
import { KermaTarget } from './kerma.ts';
import { ELECTRON_COLUMNS, RANGE } from './layout.ts';
import { followPhoton } from './photon.ts';
import { makeBits, ROW_COUNT, rowEnergyMeV } from './rows.ts';
import { type TransportTables, transportTables } from './tables.ts';

export const ELECTRON = 0;
export const POSITRON = 1;
export const PHOTON = 2;
const STACK_SIZE = 4096;
/** Particles leaving are counted above this energy, MeV. */
const COUNT_ABOVE_MEV = 0.005;
/** Steps in a layer are at most this share of its thickness in the target, so that its curved tracks are resolved. */
const TARGET_STEP_SHARE = 0.2;
/** Electrons whose range is below this share of a depth bin stay in it. */
const BIN_SHARE = 0.2;
/** Sine of the cone about the centre whose particles stand for those that meet the ball in a cavity. */
export const CAVITY_SINE = 0.2;

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
 * The fields are open to electron.ts and photon.ts, which follow the two kinds of particle, and to nobody else.
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
  /** Counts steps of charged particles and flights of photons, for timing and for the cost of a history. */
  steps = 0;
  flights = 0;
  readonly spherical: boolean;
  readonly target: number;
  readonly tables: (TransportTables | null)[];
  readonly bounds: Float64Array;
  /** g/cm³ in spheres, 1 in slabs: from lengths of the geometry to areal density. */
  readonly density: Float64Array;
  readonly forcing: Float64Array;
  readonly maxStep: Float64Array;
  /** Areal density from each layer's lower and upper bound to the target, g/cm². */
  readonly lowToTarget: Float64Array;
  readonly highToTarget: Float64Array;
  /** Longest range at each row among the materials, g/cm², and NIEL in silicon. */
  readonly longestRange = new Float64Array(ROW_COUNT);
  readonly niel = new Float64Array(ROW_COUNT);
  readonly options: TransportOptions;
  /** Electrons below this energy stop where they are if they cannot leave their layer, MeV; set for each history. */
  stayBelowMeV = 0;
  /** Longest range that stays, g/cm². */
  readonly stayRange: number;
  readonly kerma: KermaTarget | null;
  readonly bits = makeBits();
  readonly stackReal = new Float64Array(STACK_SIZE * 4);
  readonly stackInt = new Int32Array(STACK_SIZE * 4);
  private depth = 0;
  private readonly layerCount: number;
  private readonly importance: Float64Array;
  private readonly photonImportance: Float64Array;
  private readonly binScale: number;
  /** Layer that is the cavity of a hollow shell, −1 for none. */
  private readonly cavity: number;
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
    this.cavity = geometry.spherical ? this.tables.indexOf(null) : -1;
    this.bounds = new Float64Array(n + 1);
    for (let i = 0; i < n; i++) this.bounds[i + 1] = this.bounds[i] + layers[i].thickness;
    this.density = Float64Array.from(layers, ({ material }) =>
      geometry.spherical ? (material?.densityGPerCm3 ?? 0) : 1,
    );
    this.importance = Float64Array.from(layers, (layer) => layer.importance);
    this.photonImportance = Float64Array.from(layers, (layer) => layer.photonImportance ?? layer.importance);
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
    this.stayRange = options.bins > 0 ? (BIN_SHARE * this.bounds[n]) / options.bins : Number.POSITIVE_INFINITY;
    this.kerma = options.kerma ? new KermaTarget(this, geometry) : null;
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
    this.stayBelowMeV = this.options.stayShare * energyMeV;
    this.depth = 0;
    if (this.spherical) this.push(kind, this.bounds[last + 1], -cosine, energyMeV, weight, last, 0, 0);
    else this.push(kind, 0, cosine, energyMeV, weight, 0, 0, 0);
    while (this.depth > 0) {
      this.depth -= 1;
      if (this.stackInt[4 * this.depth] === PHOTON) followPhoton(this, this.depth);
      else followElectron(this, this.depth);
    }
  }

  push(
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

  /** Energy left behind in a layer; in depth bins it is to be entered besides. */
  deposit(layer: number, energy: number, fromPhoton: number): void {
    const { score } = this;
    score[ACCOUNTED] += energy;
    if (layer === this.target && (fromPhoton === 0 || this.kerma === null)) score[fromPhoton] += energy;
  }

  depositBin(x: number, energy: number): void {
    this.binEnergy[this.bin(x)] += energy;
  }

  private bin(x: number): number {
    const k = (x * this.binScale) | 0;
    return k < this.options.bins ? k : this.options.bins - 1;
  }

  charge(x: number, amount: number): void {
    if (this.options.bins > 0) this.binCharge[this.bin(x)] += amount;
  }

  /** Distance to the next bound, cm in spheres and g/cm² in slabs. */
  toBound(layer: number, x: number, w: number): number {
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
  inward(layer: number, x: number, w: number): boolean {
    if (w >= 0) return false;
    if (!this.spherical) return true;
    const inner = this.bounds[layer];
    return inner > 0 && x * x * (w * w - 1) + inner * inner > 0;
  }

  /** Where and how a particle stands that has crossed a bound, in `crossedW` and the layer returned; −1 if it is gone. */
  crossedW = 0;
  crossedX = 0;
  crossedWeight = 0;

  /**
   * Carries a particle over the bound that it has come to after a flight of `far`: out, into the next layer (split or
   * rouletted where the importance changes), or across a cavity.
   *
   * @returns the layer it is in then, −1 if it is gone; direction, place and weight are left in the `crossed` fields
   */
  cross(
    kind: number,
    layer: number,
    x: number,
    w: number,
    far: number,
    energy: number,
    weight: number,
    fromPhoton: number,
    rouletted: number,
  ): number {
    const inward = this.inward(layer, x, w);
    const bound = inward ? this.bounds[layer] : this.bounds[layer + 1];
    let arrived = w;
    if (this.spherical) {
      arrived = (x * w + far) / bound;
      arrived = arrived > 1 ? 1 : arrived < -1 ? -1 : arrived;
    }
    const next = inward ? layer - 1 : layer + 1;
    this.crossedX = bound;
    this.crossedW = arrived;
    this.crossedWeight = weight;
    if (next < 0 || next >= this.layerCount) {
      this.leave(kind, !inward && !this.spherical, energy, weight);
      return -1;
    }
    if (next === this.cavity) {
      if (!inward) {
        this.leave(kind, false, energy, weight);
        return -1;
      }
      this.lookAtBall(kind, arrived, energy, weight, fromPhoton);
      this.crossedW = -arrived;
      return layer;
    }
    if (next === this.target && kind !== PHOTON && energy > COUNT_ABOVE_MEV && (inward || !this.spherical)) {
      // One-way current: slabs count what comes from outside only.
      if (this.spherical || !inward) this.score[CROSSING] += weight;
    }
    const importance = kind === PHOTON ? this.photonImportance : this.importance;
    const ratio = importance[next] / importance[layer];
    if (ratio < 1) {
      if (this.generator.next() >= ratio) return -1;
      this.crossedWeight = weight / ratio;
    } else if (ratio > 1) {
      const share = weight / ratio;
      for (let copy = 1; copy < ratio; copy++) {
        this.push(kind, bound, arrived, energy, share, next, fromPhoton, rouletted);
      }
      this.crossedWeight = share;
    }
    return next;
  }

  /**
   * A particle enters the cavity of a shell. Few would meet the ball at its centre; the radiance changes little over a
   * cone about the centre, so each particle in the cone stands for those that do, at its share of the solid angle. The
   * particle itself crosses the cavity as if there were no ball.
   */
  private lookAtBall(kind: number, w: number, energy: number, weight: number, fromPhoton: number): void {
    if (1 - w * w > CAVITY_SINE * CAVITY_SINE || (kind === PHOTON && this.kerma !== null)) return;
    const radius = this.bounds[this.cavity + 1];
    const ball = this.bounds[this.cavity];
    const share = weight * (ball / (radius * CAVITY_SINE)) ** 2;
    if (kind !== PHOTON && energy > COUNT_ABOVE_MEV) this.score[CROSSING] += share;
    const cosine = -Math.sqrt(this.generator.next());
    this.push(kind, ball, cosine, energy, share, this.target, fromPhoton, 1);
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
}
