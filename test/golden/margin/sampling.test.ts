import { describe, expect, it } from 'vitest';
import { TIME_SIGMA_DEX } from '../../../server/fluence/percentiles.ts';
import { randomNumbers } from '../../../server/margin/beltDraws.ts';
import { makeCaseSampler, type SampledColumn } from '../../../server/margin/caseSampler.ts';
import { lotCapability, predictivePoints } from '../../../server/margin/lot.ts';
import { nodeWeights, referenceSpectrum } from '../../../server/margin/nodeWeights.ts';
import { trajectorySpectra } from '../../../server/margin/nominal.ts';
import { percentile, probabilityAbove, shareBelow, sorted } from '../../../server/margin/percentiles.ts';
import { spreadSources } from '../../../server/margin/spreadSources.ts';
import { normalCdf, normalQuantile } from '../../../server/numeric/distributions.ts';
import type { ShieldResponse } from '../../../server/shielding/types.ts';
import { type ToyFluence, toyResponse, toyTrajectory } from '../../unit/margin/toy.ts';

const DRAWS = 20_000;
/** Percentile error of N independent draws of a normal: k √(p(1−p)/N) / density, here k = 4. */
const K_SIGMA = 4;

function run(
  toy: ToyFluence,
  response: ShieldResponse,
  options: Parameters<typeof toyTrajectory>[1] = {},
  repetitions = 1,
  seed = 11,
) {
  const trajectory = toyTrajectory(toy, options);
  const spectra = trajectorySpectra(trajectory);
  const numbers = randomNumbers(['uranus'], seed, DRAWS);
  const belts = numbers.belts.uranus!;
  const sampler = makeCaseSampler([{ trajectory, repetitions }], numbers);
  const column: SampledColumn = {
    weights: {
      electron: nodeWeights(
        referenceSpectrum('electron', spectra.referenceEdges.electron),
        response.electron.doseGyCm2,
      ),
      proton: nodeWeights(referenceSpectrum('proton', spectra.referenceEdges.proton), response.proton.doseGyCm2),
    },
    statisticalErrorRel: 0,
    errorDeviates: null,
    constantGy: 0,
  };
  const samples = sampler.sample([column], DRAWS);
  return { doses: samples.doses[0], record: samples.record, belts, nominalGy: 0, spectra };
}

/** Source: quantiles of a log-normal, median · 10^(z σ), with the variances of design conventions added. */
function expectLogNormal(doses: Float64Array, median: number, sigmaDex: number): void {
  const ascending = sorted(doses);
  for (const p of [5, 25, 50, 75, 95]) {
    const z = normalQuantile(p / 100);
    const density = Math.exp(-0.5 * z * z) / Math.sqrt(2 * Math.PI);
    const toleranceDex =
      (K_SIGMA * sigmaDex * Math.sqrt((p / 100) * (1 - p / 100))) / Math.sqrt(doses.length) / density;
    const got = Math.log10(percentile(ascending, p) / median);
    expect(Math.abs(got - z * sigmaDex), `p${p}: ${got} against ${z * sigmaDex} dex`).toBeLessThan(toleranceDex);
  }
}

const electrons = (energyMeV: number): number => (energyMeV > 0.1 ? 1e-9 : 0);
const protons = (energyMeV: number): number => (energyMeV > 5 ? 1e-8 : 0);
const powerLaw: ToyFluence['fluence'] = ({ species, energyMeV }) =>
  species === 'electron' ? 1e9 * energyMeV ** -3 : 0;
const medianOf = (toy: ToyFluence, response: ShieldResponse): number => {
  const { spectra } = run(toy, response);
  return (
    spectra.onePass.electronPerCm2.reduce((sum, value, i) => sum + value * response.electron.doseGyCm2[i], 0) +
    spectra.onePass.protonPerCm2.reduce((sum, value, i) => sum + value * response.proton.doseGyCm2[i], 0)
  );
};

describe('drawn doses against closed forms', () => {
  it('spreads a dose at the anchor by the shared and the time term', () => {
    const toy: ToyFluence = { fluence: powerLaw };
    const response = toyResponse({ electron: electrons });
    expectLogNormal(run(toy, response).doses, medianOf(toy, response), Math.hypot(0.35, TIME_SIGMA_DEX));
  });

  it('spreads a dose away from the anchor by the whole sigma of its L', () => {
    for (const side of ['inside', 'outside'] as const) {
      const toy: ToyFluence = { sides: [side], sigmaDex: [1.1], fluence: powerLaw };
      const response = toyResponse({ electron: electrons });
      expectLogNormal(run(toy, response).doses, medianOf(toy, response), Math.hypot(1.1, TIME_SIGMA_DEX));
    }
  });

  it('adds the energy term where the response looks', () => {
    const toy: ToyFluence = {
      energySigmaDex: (_, energy) => (energy > 5 ? 0.4 : 0),
      fluence: ({ species, energyMeV }) => (species === 'proton' ? 1e7 * energyMeV ** -2 : 0),
    };
    const response = toyResponse({ proton: (energy) => (energy > 20 ? 1e-8 : 0) });
    expectLogNormal(run(toy, response).doses, medianOf(toy, response), Math.hypot(0.35, TIME_SIGMA_DEX, 0.4));
  });

  it('draws the two species apart', () => {
    const toy: ToyFluence = {
      fluence: ({ species, energyMeV }) => (species === 'electron' ? 1e9 * energyMeV ** -3 : 1e7 * energyMeV ** -2),
    };
    const response = toyResponse({ electron: electrons, proton: protons });
    const both = run(toy, response);
    const only = run(toy, toyResponse({ electron: electrons }));
    const other = run(toy, toyResponse({ proton: protons }));
    let sxy = 0;
    let worst = 0;
    for (let i = 0; i < DRAWS; i++) {
      worst = Math.max(worst, Math.abs(both.doses[i] / (only.doses[i] + other.doses[i]) - 1));
      sxy += Math.log(only.doses[i]) * Math.log(other.doses[i]);
    }
    expect(worst).toBeLessThan(1e-12);
    const mean = (x: Float64Array): number => x.reduce((s, v) => s + Math.log(v), 0) / DRAWS;
    const sd = (x: Float64Array): number => {
      const centre = mean(x);
      return Math.sqrt(x.reduce((s, v) => s + (Math.log(v) - centre) ** 2, 0) / DRAWS);
    };
    const correlation = (sxy / DRAWS - mean(only.doses) * mean(other.doses)) / (sd(only.doses) * sd(other.doses));
    // Source: independent deviates; the sample correlation of N pairs has σ = 1/√N.
    expect(Math.abs(correlation)).toBeLessThan(K_SIGMA / Math.sqrt(DRAWS));
  });

  it('mixes phases by weight and field models at equal odds', () => {
    const toy: ToyFluence = {
      variants: [
        { fieldModelId: 'uranus-q3', offsetDeg: 0, weight: 0.75, primary: true },
        { fieldModelId: 'uranus-q3', offsetDeg: 90, weight: 0.25, primary: true },
        { fieldModelId: 'uranus-ah5', offsetDeg: 0, weight: 1, primary: false },
      ],
      fluence: (at) => powerLaw(at) * [1, 10, 100][at.variant],
    };
    const response = toyResponse({ electron: electrons });
    const { doses, belts } = run(toy, response, { mode: 'sweep' });
    const median = medianOf({ fluence: powerLaw }, response);
    const sigma = Math.hypot(0.35, TIME_SIGMA_DEX);
    const ascending = sorted(doses);
    expect(belts.draws).toBe(DRAWS);
    // Source: distribution function of the mixture 3/8, 1/8, 1/2 of three log-normals.
    for (const x of [-0.5, 0, 0.5, 1, 1.5, 2, 2.5]) {
      const expected =
        0.375 * normalCdf(x / sigma) + 0.125 * normalCdf((x - 1) / sigma) + 0.5 * normalCdf((x - 2) / sigma);
      const got = shareBelow(ascending, median * 10 ** x);
      expect(Math.abs(got - expected)).toBeLessThan(K_SIGMA * Math.sqrt((expected * (1 - expected)) / DRAWS));
    }
  });

  it('shares the time term within 30 days and renews it after', () => {
    // Without belt spread the dose of two passes is m (10^{0.3 s1} + 10^{0.3 s2}), s2 = s1 inside 30 days.
    const toy: ToyFluence = { sharedSigmaDex: 0, fluence: powerLaw };
    const response = toyResponse({ electron: electrons });
    const median = medianOf(toy, response);
    expectLogNormal(run(toy, response, { spanDays: 29 }, 2).doses, 2 * median, TIME_SIGMA_DEX);
    const apart = run(toy, response, { spanDays: 31 }, 2).doses;
    const c = TIME_SIGMA_DEX * Math.LN10;
    // Source: mean and variance of a sum of two independent log-normals.
    const mean = 2 * median * Math.exp((c * c) / 2);
    const variance = 2 * median ** 2 * Math.exp(c * c) * (Math.exp(c * c) - 1);
    const got = apart.reduce((sum, value) => sum + value, 0) / DRAWS;
    expect(Math.abs(got - mean)).toBeLessThan(K_SIGMA * Math.sqrt(variance / DRAWS));
    const spread = apart.reduce((sum, value) => sum + (value - got) ** 2, 0) / DRAWS;
    /** Fourth-moment noise of the variance of a log-normal with c = 0.69, relative, 4 σ at N = 20 000. */
    const VARIANCE_TOLERANCE_REL = 0.12;
    expect(Math.abs(spread / variance - 1)).toBeLessThan(VARIANCE_TOLERANCE_REL);
  });

  it('lets each swept repetition meet its own phase, and shares one offset otherwise', () => {
    const toy: ToyFluence = {
      sharedSigmaDex: 0,
      variants: [
        { fieldModelId: 'uranus-q3', offsetDeg: 0, weight: 0.5, primary: true },
        { fieldModelId: 'uranus-q3', offsetDeg: 180, weight: 0.5, primary: true },
      ],
      fluence: (at) => powerLaw(at) * (at.variant === 0 ? 1 : 3),
    };
    const response = toyResponse({ electron: electrons });
    const median = medianOf({ sharedSigmaDex: 0, fluence: powerLaw }, response);
    // All ten repetitions within 30 days share s, so dose / 10^{0.3 s} is a plain count of phases.
    const counts = (mode: 'sweep' | 'drawn'): number[] => {
      const { doses, record } = run(toy, response, { mode, spanDays: 1 }, 10);
      const out = new Array<number>(11).fill(0);
      for (let i = 0; i < DRAWS; i++) {
        const units = doses[i] / (median * 10 ** (TIME_SIGMA_DEX * record.state[2 * i]));
        out[Math.round((units - 10) / 2)]++;
      }
      return out;
    };
    const swept = counts('sweep');
    // Source: binomial distribution, n = 10, p = 1/2.
    const binomial = [1, 10, 45, 120, 210, 252, 210, 120, 45, 10, 1].map((ways) => ways / 1024);
    swept.forEach((count, k) => {
      const sigma = Math.sqrt(DRAWS * binomial[k] * (1 - binomial[k]));
      expect(Math.abs(count - DRAWS * binomial[k]), `k ${k}`).toBeLessThan(K_SIGMA * sigma + 1);
    });
    const shared = counts('drawn');
    expect(shared.slice(1, 10).every((count) => count === 0)).toBe(true);
    expect(Math.abs(shared[0] - DRAWS / 2)).toBeLessThan((K_SIGMA * Math.sqrt(DRAWS)) / 2);
  });
});

describe('the sparser energies', () => {
  it('follow drawn spectra to a fraction of a per cent', () => {
    // Source: the same draws folded bin by bin with the factors of design conventions, written out here.
    const sides = ['inside', 'inside', 'anchor', 'outside', 'outside'] as const;
    const sigmaDex = [1.6, 0.9, 0.35, 0.5, 0.7];
    const energySigma = (energy: number): number =>
      energy < 2.5 ? 0 : energy < 10 ? (0.8 * Math.log(energy / 2.5)) / Math.log(4) : 0.8;
    const toy: ToyFluence = {
      sides: [...sides],
      sigmaDex,
      energySigmaDex: (_, energy) => energySigma(energy),
      fluence: ({ species, energyMeV, bin }) =>
        species === 'electron'
          ? (1e9 * 10 ** -((2 - bin) ** 2) * energyMeV ** -1.1) / (1 + (energyMeV / (3 - 0.5 * bin)) ** 5.6)
          : 0,
    };
    const response = toyResponse({ electron: (energy) => 1e-9 * Math.exp(-1.5 / energy) });
    const { doses, belts, record, spectra } = run(toy, response);
    const artefact = spectra.trajectory.fluence;
    const errors: number[] = [];
    for (let draw = 0; draw < 400; draw++) {
      const [g, i, o, t] = belts.factors.subarray(draw * 8, draw * 8 + 4);
      let expected = 0;
      const differential = new Float64Array(91);
      for (let bin = 0; bin < 5; bin++) {
        const extra = Math.sqrt(sigmaDex[bin] ** 2 - 0.35 ** 2);
        const factor = 0.35 * g + (sides[bin] === 'outside' ? o : i) * extra + 0.3 * record.state[2 * draw];
        for (let edge = 0; edge < 91; edge++) {
          differential[edge] +=
            artefact.electron[bin * 91 + edge] * 10 ** (factor + t * artefact.energySigmaDex.electron[edge]);
        }
      }
      const edges = spectra.referenceEdges.electron.length;
      expect(edges).toBe(91);
      for (let b = 0; b < 90; b++) expected += powerBin(differential, b) * response.electron.doseGyCm2[b];
      errors.push(Math.abs(doses[draw] / expected - 1));
    }
    errors.sort((a, b) => a - b);
    /** Cubic interpolation over a twelfth of a decade; the largest where t σ_E bends at 2.5 and 10 MeV, |t| > 3. */
    const MEDIAN_TOLERANCE_REL = 5e-4;
    const LARGEST_TOLERANCE_REL = 5e-3;
    expect(errors[200]).toBeLessThan(MEDIAN_TOLERANCE_REL);
    expect(errors[399]).toBeLessThan(LARGEST_TOLERANCE_REL);
  });
});

describe('what follows from the draws', () => {
  it('tells the sources of spread apart', () => {
    const toy: ToyFluence = { sides: ['inside'], sigmaDex: [1], fluence: powerLaw };
    const { doses, belts, record } = run(toy, toyResponse({ electron: electrons }));
    const shares = spreadSources(doses, [belts], record, null);
    const share = (source: string): number => shares.find((entry) => entry.source === source)?.share ?? 0;
    // Source: variances 1² of the belt against 0.3² of time; sampling noise of r² with N draws is below 4·2r/√N.
    const expected = 1 / (1 + 0.09);
    expect(Math.abs(share('electronBelt') - expected)).toBeLessThan(0.01);
    expect(Math.abs(share('timeVariation') - (1 - expected))).toBeLessThan(0.01);
    expect(share('rotationPhase')).toBe(0);
    expect(shares.reduce((sum, entry) => sum + entry.share, 0)).toBeCloseTo(1, 12);
  });

  it('gives the probability of surviving a log-normal dose', () => {
    const toy: ToyFluence = { fluence: powerLaw };
    const response = toyResponse({ electron: electrons });
    const { doses } = run(toy, response);
    const sigma = Math.hypot(0.35, TIME_SIGMA_DEX) * Math.LN10;
    const medianKrad = medianOf(toy, response) / 10;
    const ascending = sorted(doses);
    for (const factor of [1, 2]) {
      // Source: P(C > f D) = Φ(ln(C / (f m)) / σ).
      const expected = normalCdf(Math.log(3 / factor) / sigma);
      const got = probabilityAbove(ascending, Float64Array.of(3 * medianKrad), factor, 0);
      expect(Math.abs(got - expected)).toBeLessThan(K_SIGMA * Math.sqrt((expected * (1 - expected)) / DRAWS));
    }
    // A lot: the same integral over its predictive t, here by a fine midpoint sum over 20 000 quantiles.
    const lot = lotCapability([2.4, 2.8, 3, 3.3, 3.9].map((value) => value * medianKrad));
    const fine = predictivePoints(lot, 20_000);
    const expected =
      fine.reduce((sum, capability) => sum + normalCdf(Math.log(capability / medianKrad) / sigma), 0) / fine.length;
    const got = probabilityAbove(ascending, predictivePoints(lot, 400), 1, 0);
    expect(Math.abs(got - expected)).toBeLessThan(K_SIGMA * Math.sqrt((expected * (1 - expected)) / DRAWS));
  });
});

/** Integral over bin b of the electron grid by the power law between its edges. */
function powerBin(differential: Float64Array, b: number): number {
  const ratio = (100 / 0.02) ** (1 / 90);
  const low = 0.02 * ratio ** b;
  const slope = Math.log(differential[b + 1] / differential[b]) / Math.log(ratio);
  return (differential[b] * low * (ratio ** (slope + 1) - 1)) / (slope + 1);
}
