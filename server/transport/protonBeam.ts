import { gaussLegendre } from '../numeric/gaussLegendre.ts';
import type { BeamLayer, BeamResult } from './beam.ts';
import { protonEnergyBehind } from './protons.ts';

const DIRECTIONS = gaussLegendre(32);

/**
 * A proton beam on slabs along straight paths: what is lost between the two faces of each depth bin. No statistics.
 *
 * @param cosine - to the inward normal; 0 stands for the cosine law
 */
export function protonBeam(
  layers: readonly BeamLayer[],
  energyMeV: number,
  cosine: number,
  bins: number,
  elapsedMs: () => number,
): BeamResult {
  const total = layers.reduce((sum, layer) => sum + layer.thickness, 0);
  const width = total / bins;
  const dose = new Float64Array(bins);
  const charge = new Float64Array(bins);
  let through = 0;
  let throughEnergy = 0;
  const directions = cosine > 0 ? 1 : DIRECTIONS.x.length;
  for (let d = 0; d < directions; d++) {
    const u = cosine > 0 ? cosine : 0.5 * (1 + DIRECTIONS.x[d]);
    const weight = cosine > 0 ? 1 : DIRECTIONS.w[d] * u;
    let before = energyMeV;
    for (let b = 0; b < bins; b++) {
      const after = protonEnergyBehind(layersDownTo(layers, (b + 1) * width), energyMeV, u);
      dose[b] += (weight * (before - after)) / width;
      // A stopped proton takes up one electron.
      if (before > 0 && after === 0) charge[b] -= weight / width;
      before = after;
    }
    if (before > 0) {
      through += weight;
      throughEnergy += weight * before;
    }
  }
  const deposited = dose.reduce((sum, value) => sum + value * width, 0);
  return {
    numberBackscatter: 0,
    energyBackscatter: 0,
    numberTransmission: through,
    energyTransmission: throughEnergy / energyMeV,
    energyBalance: (deposited + throughEnergy) / energyMeV,
    depthGPerCm2: Array.from(dose, (_, b) => (b + 0.5) * width),
    doseMeVCm2PerG: Array.from(dose),
    doseSigma: Array.from(dose, () => 0),
    chargePerGPerCm2: Array.from(charge),
    historiesPerS: (1000 * directions) / Math.max(1e-3, elapsedMs()),
    nsPerStep: (1e6 * elapsedMs()) / (directions * bins),
  };
}

function layersDownTo(layers: readonly BeamLayer[], depth: number) {
  const out = [];
  let left = depth;
  for (const { material, thickness } of layers) {
    if (!(left > 0)) break;
    out.push({ material, arealDensityGPerCm2: Math.min(left, thickness) });
    left -= thickness;
  }
  return out;
}
