import { type Material, nielSilicon, ProtonRange, protonStopping } from '../matter/index.ts';
import { gaussLegendre } from '../numeric/gaussLegendre.ts';
import { PROTON_EDGES_MEV } from '../numeric/spectrumGrid.ts';
import { GY_PER_MEV_PER_G } from '../units.ts';

export interface ProtonLayer {
  readonly material: Material;
  readonly arealDensityGPerCm2: number;
}

/** Response to protons, each averaged over the bins of PROTON_EDGES_MEV with equal weight in ln E. */
export interface ProtonResponse {
  readonly doseGyCm2: Float64Array;
  readonly transmitted: Float64Array;
  readonly damageMeVCm2PerG: Float64Array;
}

const DIRECTIONS = gaussLegendre(48);
const ENERGIES = gaussLegendre(5);
const ranges = new WeakMap<Material, ProtonRange>();

function rangeOf(of: Material): ProtonRange {
  let found = ranges.get(of);
  if (found === undefined) {
    found = new ProtonRange(of);
    ranges.set(of, found);
  }
  return found;
}

/** Kinetic energy behind layers that a proton crosses at 1/`cosine` of their thickness, MeV; 0 when it stops. */
export function protonEnergyBehind(layers: readonly ProtonLayer[], energyMeV: number, cosine: number): number {
  let energy = energyMeV;
  for (const { material, arealDensityGPerCm2 } of layers) {
    const range = rangeOf(material);
    const rest = range.rangeGPerCm2(energy) - arealDensityGPerCm2 / cosine;
    if (!(rest > 0)) return 0;
    energy = range.energyMeV(rest);
    if (energy === 0) return 0;
  }
  return energy;
}

/** Lowest energy that gets through, MeV: the layers walked from the inside out. */
export function protonThresholdMeV(layers: readonly ProtonLayer[], cosine: number): number {
  let energy = 0;
  for (let i = layers.length - 1; i >= 0; i--) {
    const range = rangeOf(layers[i].material);
    const residual = energy > 0 ? range.rangeGPerCm2(energy) : 0;
    energy = range.energyMeV(residual + layers[i].arealDensityGPerCm2 / cosine);
  }
  return energy;
}

/**
 * Protons slowing down along straight paths without straggling, scattering or nuclear reactions. Reactions take out about
 * a tenth of the protons per 10 g/cm² of aluminium above 100 MeV and leave short-ranged fragments; they are not included.
 *
 * Slab: isotropic fluence from the front, target a layer of the given thickness behind. Sphere: the layers are crossed
 * radially (straight ahead), target a ball of the given radius. Per unit 4π-integrated fluence; transparent limits
 * S/2 for the slab and S for the sphere. Bins are cut where a path just penetrates the shield and just the target.
 *
 * @param shape - `slab`: `sizeGPerCm2` is the target's thickness; `sphere`: its radius
 */
export function protonResponse(
  shape: 'slab' | 'sphere',
  layers: readonly ProtonLayer[],
  target: Material,
  sizeGPerCm2: number,
): ProtonResponse {
  const count = PROTON_EDGES_MEV.length - 1;
  const response = {
    doseGyCm2: new Float64Array(count),
    transmitted: new Float64Array(count),
    damageMeVCm2PerG: new Float64Array(count),
  };
  const inTarget = rangeOf(target);
  // Weight of the direction (slab) or chord (ball) u, and factor from energy per crossing to energy per gram.
  const perGram = shape === 'slab' ? 1 / (4 * sizeGPerCm2) : 3 / (4 * sizeGPerCm2);
  for (let d = 0; d < DIRECTIONS.x.length; d++) {
    const u = 0.5 * (1 + DIRECTIONS.x[d]);
    const weight = DIRECTIONS.w[d] * u;
    const cosine = shape === 'slab' ? u : 1;
    const chord = shape === 'slab' ? sizeGPerCm2 / u : 2 * sizeGPerCm2 * u;
    const threshold = protonThresholdMeV(layers, cosine);
    const through = protonThresholdMeV([...layers, { material: target, arealDensityGPerCm2: chord * cosine }], cosine);
    for (let bin = 0; bin < count; bin++) {
      const low = PROTON_EDGES_MEV[bin];
      const high = PROTON_EDGES_MEV[bin + 1];
      if (high <= threshold) continue;
      const width = Math.log(high / low);
      const cuts = [Math.max(low, threshold), Math.min(high, Math.max(low, through)), high];
      for (let piece = 0; piece < 2; piece++) {
        const from = Math.max(cuts[0], piece === 0 ? cuts[0] : cuts[1]);
        const span = Math.log(cuts[piece + 1] / from);
        if (!(span > 0)) continue;
        for (let k = 0; k < ENERGIES.x.length; k++) {
          const energy = from * Math.exp(0.5 * span * (1 + ENERGIES.x[k]));
          const share = (weight * 0.5 * ENERGIES.w[k] * span) / width;
          const entering = protonEnergyBehind(layers, energy, cosine);
          if (!(entering > 0)) continue;
          response.transmitted[bin] += 0.25 * share;
          const range = inTarget.rangeGPerCm2(entering);
          const path = Math.min(range, chord);
          const leaving = range > chord ? inTarget.energyMeV(range - chord) : 0;
          // Where the loss is a small share of the energy, the stopping power is more accurate than a difference.
          const middle = inTarget.energyMeV(Math.max(range - 0.5 * path, 1e-12));
          const lost =
            entering - leaving < 0.01 * entering ? protonStopping(target, middle) * path : entering - leaving;
          response.doseGyCm2[bin] += share * perGram * lost * GY_PER_MEV_PER_G;
          const late = inTarget.energyMeV(Math.max(range - 0.887 * path, 1e-12));
          const early = inTarget.energyMeV(Math.max(range - 0.113 * path, 1e-12));
          const damage =
            (5 * nielSilicon('proton', early) + 8 * nielSilicon('proton', middle) + 5 * nielSilicon('proton', late)) /
            18;
          response.damageMeVCm2PerG[bin] += share * perGram * path * damage;
        }
      }
    }
  }
  return response;
}
