import { ELECTRON_REST_MEV, type Material, photonEnergyAbsorption } from '../matter/index.ts';
import type { TransportGeometry } from './geometry.ts';
import { FROM_PHOTONS, type Kernel } from './kernel.ts';
import { PHOTON_COLUMNS } from './layout.ts';
import { FRACTION_MASK, FRACTION_SCALE, ROW_BASE, ROW_COUNT, ROW_SHIFT, rowEnergyMeV } from './rows.ts';

/** Photons that start nearer to the ball than this many of its radii are counted by their own flight through it. */
const NEAR_BALL_RADII = 3;

/**
 * Photon dose in the target by expectation: every flight, before it is drawn, adds the energy that it gives on average to
 * charged particles in the target, E · μ_en times the expected track length. Valid where the electrons that photons set free
 * all about the target stop in matter like its own (charged-particle equilibrium), so the caller asks for it only with
 * at least one electron range of such matter on every side: not behind slabs that are open behind, where the target misses
 * the electrons that would come back (by 5 to 30 %).
 *
 * Slabs: expected track length along the direction drawn. Spheres and shells: at every emission and scattering, the chance
 * to head for the centre times attenuation over distance squared; flights that start close to the ball of a solid sphere by
 * their own track length in it.
 *
 * @source track-length and next-event estimators: Spanier & Gelbard (1969), Monte Carlo Principles, ch. 2-4
 */
export class KermaTarget {
  private readonly kernel: Kernel;
  private readonly spherical: boolean;
  /** Shape (ROW_COUNT,), cm²/g. */
  private readonly absorption: Float64Array;
  /** Radius of the ball, cm, and beyond which photons are counted by expectation. */
  private readonly ball: number;
  private readonly nearBall: number;
  /** Mass of the ball, g, and half its mean chord, g/cm². */
  private readonly mass: number;
  private readonly halfChord: number;

  constructor(kernel: Kernel, geometry: TransportGeometry) {
    const { material, thickness } = geometry.layers[geometry.target];
    if (material === null) throw new TypeError('the target is empty');
    this.kernel = kernel;
    this.spherical = geometry.spherical;
    this.absorption = absorptionOf(material);
    this.ball = thickness;
    const hollow = geometry.layers.some((layer) => layer.material === null);
    this.nearBall = geometry.spherical && !hollow ? NEAR_BALL_RADII * thickness : 0;
    this.mass = (4 / 3) * Math.PI * thickness ** 3 * material.densityGPerCm3;
    this.halfChord = (2 / 3) * thickness * material.densityGPerCm3;
  }

  /** Whether a flight that starts here is counted by its track length in the ball. */
  near(x: number): boolean {
    return x < this.nearBall;
  }

  /** Adds the track of a flight in the target, `length` in g/cm². */
  tracked(energy: number, weight: number, length: number): void {
    this.kernel.score[FROM_PHOTONS] += weight * length * energy * this.absorptionAt(energy);
  }

  /** A flight of a slab begins. */
  flight(layer: number, x: number, w: number, energy: number, weight: number): void {
    const { kernel } = this;
    if (this.spherical || w === 0) return;
    const { target, bounds } = kernel;
    let tau = 0;
    if (layer < target) {
      if (w < 0) return;
      tau = (bounds[layer + 1] - x) * this.attenuation(layer, energy);
      for (let k = layer + 1; k < target; k++) tau += (bounds[k + 1] - bounds[k]) * this.attenuation(k, energy);
    } else if (layer > target) {
      if (w > 0) return;
      tau = (x - bounds[layer]) * this.attenuation(layer, energy);
      for (let k = layer - 1; k > target; k--) tau += (bounds[k + 1] - bounds[k]) * this.attenuation(k, energy);
    }
    const across = layer !== target ? this.ball : w > 0 ? bounds[target + 1] - x : x - bounds[target];
    const steep = 1 / Math.abs(w);
    if (tau * steep > LOST) return;
    const mu = this.attenuation(target, energy);
    this.tracked(energy, weight, (-Math.expm1(-mu * across * steep) / mu) * Math.exp(-tau * steep));
  }

  /** Bremsstrahlung of an electron that flies at cosine `w` to the radius. */
  radiated(layer: number, x: number, w: number, beta: number, energy: number, weight: number): void {
    if (!this.spherical || x < this.nearBall) return;
    this.towards(layer, x, energy, (weight * (1 - beta * beta)) / (4 * Math.PI * (1 + beta * w) ** 2));
  }

  isotropic(layer: number, x: number, energy: number, weight: number): void {
    if (!this.spherical || x < this.nearBall) return;
    this.towards(layer, x, energy, weight / (4 * Math.PI));
  }

  /** Compton scattering of a photon that flies at cosine `w` to the radius. */
  scattered(layer: number, x: number, w: number, energy: number, weight: number): void {
    if (!this.spherical || x < this.nearBall) return;
    const k = energy / ELECTRON_REST_MEV;
    const t = 1 + w;
    const ratio = 1 / (1 + k * t);
    const density = (ratio * ratio * (ratio + 1 / ratio - t * (2 - t))) / kleinNishinaTotal(k);
    this.towards(layer, x, energy * ratio, weight * density);
  }

  /** @param perSr - weight per steradian in the direction of the centre */
  private towards(layer: number, x: number, energy: number, perSr: number): void {
    if (energy <= this.kernel.options.absorbMeV) return;
    const { bounds, density, target } = this.kernel;
    let tau = (x - bounds[layer]) * density[layer] * this.attenuation(layer, energy);
    for (let k = layer - 1; k > target; k--) {
      tau += (bounds[k + 1] - bounds[k]) * density[k] * this.attenuation(k, energy);
    }
    if (tau > LOST) return;
    const inBall = this.halfChord * this.attenuation(target, energy);
    const spread = (1 + 0.2 * (this.ball / x) ** 2) / (x * x);
    this.kernel.score[FROM_PHOTONS] +=
      perSr * Math.exp(-tau - inBall) * spread * this.mass * energy * this.absorptionAt(energy);
  }

  private attenuation(layer: number, energy: number): number {
    const tables = this.kernel.tables[layer];
    if (tables === null) return 0;
    const { bits } = this.kernel;
    bits.float[0] = energy;
    const at = ((bits.int[0] >> ROW_SHIFT) - ROW_BASE) * PHOTON_COLUMNS;
    const fraction = (bits.int[0] & FRACTION_MASK) * FRACTION_SCALE;
    return tables.photon[at] + fraction * (tables.photon[at + PHOTON_COLUMNS] - tables.photon[at]);
  }

  private absorptionAt(energy: number): number {
    const { bits } = this.kernel;
    bits.float[0] = energy;
    const row = (bits.int[0] >> ROW_SHIFT) - ROW_BASE;
    const fraction = (bits.int[0] & FRACTION_MASK) * FRACTION_SCALE;
    return this.absorption[row] + fraction * (this.absorption[row + 1] - this.absorption[row]);
  }
}

/** Optical depth beyond which nothing is worth adding. */
const LOST = 60;

/** ∫ of the Klein-Nishina angular density over all directions, in units of r_e²/2, over the energy in m c². */
function kleinNishinaTotal(k: number): number {
  if (k < 0.02) return ((16 * Math.PI) / 3) * (1 - 2 * k + 5.2 * k * k);
  const log = Math.log(1 + 2 * k);
  const first = ((1 + k) / (k * k)) * ((2 * (1 + k)) / (1 + 2 * k) - log / k);
  return 4 * Math.PI * (first + log / (2 * k) - (1 + 3 * k) / (1 + 2 * k) ** 2);
}

const absorptions = new WeakMap<Material, Float64Array>();

function absorptionOf(material: Material): Float64Array {
  let rows = absorptions.get(material);
  if (rows === undefined) {
    rows = Float64Array.from({ length: ROW_COUNT }, (_, row) =>
      photonEnergyAbsorption(material, Math.min(Math.max(rowEnergyMeV(row), 0.001), 100)),
    );
    absorptions.set(material, rows);
  }
  return rows;
}
