import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { ELECTRON_REST_MEV, material, photonEnergyAbsorption } from '../../../server/matter/index.ts';
import { runBeam } from '../../../server/transport/beam.ts';
import { Generator } from '../../../server/transport/generator.ts';
import { protonEnergyBehind } from '../../../server/transport/protons.ts';
import { comptonRatio, exponential, mollerShare } from '../../../server/transport/sampling.ts';

const NIST = JSON.parse(
  readFileSync(new URL('../../../fixtures/golden/matter/nist.json', import.meta.url), 'utf8'),
) as Record<string, { energiesMeV: number[]; byMaterial: Record<string, number[]> }>;
const DRAWS = 200_000;

function sampled(draw: (generator: Generator) => number): { mean: number; sigma: number } {
  const generator = new Generator();
  generator.start(3, 1, 4);
  let sum = 0;
  let square = 0;
  for (let i = 0; i < DRAWS; i++) {
    const value = draw(generator);
    sum += value;
    square += value * value;
  }
  return { mean: sum / DRAWS, sigma: Math.sqrt((square / DRAWS - (sum / DRAWS) ** 2) / DRAWS) };
}

describe('sampling against closed forms', () => {
  it.each([0.05, 0.5, 5, 50])('Compton photons of %s MeV keep the mean energy of Klein & Nishina', (energy) => {
    // Source: Klein & Nishina (1929): dσ/dΩ ∝ P²(P + 1/P − sin²θ), P = 1/(1 + k(1 − cos θ)); midpoint rule over cos θ.
    const k = energy / ELECTRON_REST_MEV;
    let all = 0;
    let kept = 0;
    const n = 200_000;
    for (let i = 0; i < n; i++) {
      const cosine = (2 * (i + 0.5)) / n - 1;
      const p = 1 / (1 + k * (1 - cosine));
      const density = p * p * (p + 1 / p - 1 + cosine * cosine);
      all += density;
      kept += density * p;
    }
    const { mean, sigma } = sampled((generator) => comptonRatio(energy, generator));
    expect(Math.abs(mean - kept / all)).toBeLessThan(4 * sigma);
  });

  it('Møller collisions give away the mean share of their cross-section', () => {
    // Source: Møller (1932) in the form of ICRU Report 37; midpoint rule over ln of the share.
    const energy = 2;
    const cut = 0.01;
    const gamma = 1 + energy / ELECTRON_REST_MEV;
    const [a, b] = [((gamma - 1) / gamma) ** 2, (2 * gamma - 1) / gamma ** 2];
    let all = 0;
    let given = 0;
    const n = 20_000;
    for (let i = 0; i < n; i++) {
      const e = cut * (0.5 / cut) ** ((i + 0.5) / n);
      const density = e * (1 / e ** 2 + 1 / (1 - e) ** 2 + a - b / (e * (1 - e)));
      all += density;
      given += density * e;
    }
    const { mean, sigma } = sampled((generator) => mollerShare(energy, cut, generator));
    expect(Math.abs(mean - given / all)).toBeLessThan(4 * sigma);
  });

  it('free paths have mean and variance 1', () => {
    // Source: the exponential distribution.
    const first = sampled((generator) => exponential(generator.next()));
    const second = sampled((generator) => exponential(generator.next()) ** 2);
    expect(Math.abs(first.mean - 1)).toBeLessThan(4 * first.sigma);
    expect(Math.abs(second.mean - 2)).toBeLessThan(4 * second.sigma);
  });

  it('protons come out of aluminium with the energy that the range tables leave them', () => {
    // Source: NIST PSTAR: what is left behind R(E1) − R(E2) is E2. Straight paths, continuous slowing down.
    const { energiesMeV, byMaterial } = NIST.protonCsdaGPerCm2;
    const ranges = byMaterial.Al;
    let checked = 0;
    energiesMeV.forEach((from, i) => {
      for (let j = 0; j < i; j++) {
        if (energiesMeV[j] < 5 || from > 500) continue;
        const layers = [{ material: material('Al'), arealDensityGPerCm2: ranges[i] - ranges[j] }];
        const left = protonEnergyBehind(layers, from, 1);
        // 0.3 % of the way: range tables and stopping powers agree to that.
        const slack = (0.003 * ranges[i] * energiesMeV[j]) / (1.7 * ranges[j]);
        expect(Math.abs(left - energiesMeV[j]), `${from} to ${energiesMeV[j]} MeV`).toBeLessThan(
          slack + 0.005 * energiesMeV[j],
        );
        checked += 1;
      }
    });
    expect(checked).toBeGreaterThan(3);
  });

  it('silicon absorbs photons as NIST says', () => {
    // Source: NIST XAAMDI (NISTIR 5632), silicon, μ_en/ρ in cm²/g; 2 %, and 4 % at 10 MeV, where pairs radiate.
    for (const [energy, nist] of [
      [0.03, 1.164],
      [0.05, 0.243],
      [0.1, 0.04513],
      [0.3, 0.02932],
      [1, 0.02778],
      [3, 0.02101],
      [5, 0.01878],
      [10, 0.01753],
    ]) {
      expect(Math.abs(photonEnergyAbsorption(material('Si'), energy) / nist - 1), `${energy} MeV`).toBeLessThan(
        energy < 10 ? 0.02 : 0.04,
      );
    }
  });

  it('inserting a layer of the same material anywhere changes no dose', () => {
    // Source: a slab is the sum of its parts. Two cuts of 0.3 and 0.7 of the same layer.
    const whole = {
      particle: 'electron',
      energyMeV: 2,
      incidence: 'cosine',
      bins: 8,
      histories: 15_000,
      photons: false,
    } as const;
    const al = (thicknessGPerCm2: number) => ({ materialId: 'Al', thicknessGPerCm2 });
    const one = runBeam({ ...whole, seed: 1, layers: [al(0.6)] }, () => 1);
    const two = runBeam({ ...whole, seed: 2, layers: [al(0.18), al(0.42)] }, () => 1);
    one.doseMeVCm2PerG.forEach((dose, bin) => {
      const sigma = Math.hypot(one.doseSigma[bin], two.doseSigma[bin]);
      expect(Math.abs(dose - two.doseMeVCm2PerG[bin])).toBeLessThan(4 * sigma);
    });
  });
});
