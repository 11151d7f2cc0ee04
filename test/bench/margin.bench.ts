/** Margins at the size of a large trade: 20 cases × 50 options × 100 parts, responses at hand. */
import { assess } from '../../server/margin/assess.ts';
import { type BeltDraws, randomNumbers } from '../../server/margin/beltDraws.ts';
import { makeCaseSampler } from '../../server/margin/caseSampler.ts';
import type { AssessmentInput, PartInput } from '../../server/margin/input.ts';
import { nodeWeights, referenceSpectrum } from '../../server/margin/nodeWeights.ts';
import { trajectorySpectra } from '../../server/margin/nominal.ts';
import { percentile, sorted } from '../../server/margin/percentiles.ts';
import { randomStream } from '../../server/numeric/random.ts';
import { toyInput, toyResponse, toyTrajectory } from '../unit/margin/toy.ts';

interface Row {
  name: string;
  value: number;
  unit: string;
  rival?: { name: string; value: number };
  limit?: string;
}

const CASES = 20;
const OPTIONS = 50;
const PARTS = 100;
const L_BINS = 40;
const PHASES = 36;

/** A flyby of realistic size: two field models × 36 phases, 40 L bins, 1000 history samples. */
function flyby(index: number): ReturnType<typeof toyTrajectory> {
  const random = randomStream(3, 0, index);
  const weights = Array.from({ length: PHASES * 2 }, () => 0.3 + random.uniform());
  const samples = 1000;
  const electron = new Float32Array(samples * 91);
  for (let i = 0; i < samples; i++) {
    for (let edge = 0; edge < 91; edge++)
      electron[i * 91 + edge] = 1e6 * Math.exp(-(((i - 500) / 150) ** 2)) * 0.85 ** edge;
  }
  return toyTrajectory(
    {
      name: `Flyby ${index}`,
      variants: weights.map((_, v) => ({
        fieldModelId: v < PHASES ? 'uranus-q3' : 'uranus-ah5',
        offsetDeg: (360 * (v % PHASES)) / PHASES,
        weight: 1 / weights.length,
        primary: v < PHASES,
      })),
      sides: Array.from({ length: L_BINS }, (_, l) => (l < 18 ? 'inside' : l < 20 ? 'anchor' : 'outside')),
      sigmaDex: Array.from({ length: L_BINS }, (_, l) =>
        l < 18 ? 1.8 - 0.08 * l : l < 20 ? 0.35 : 0.35 + 0.02 * (l - 19),
      ),
      energySigmaDex: (_, energy) => (energy < 2.5 ? 0 : Math.min(0.8, 0.55 * Math.log(energy / 2.5))),
      fluence: ({ variant, bin, species, energyMeV }) =>
        weights[variant] *
        (species === 'electron'
          ? (3e8 * Math.exp(-(((bin - 20) / 8) ** 2)) * energyMeV ** -1.1) / (1 + (energyMeV / 1.2) ** 5.6)
          : 1e4 * Math.exp(-(((bin - 20) / 8) ** 2)) * energyMeV ** -3.1),
      history: {
        epochTdbS: Float64Array.from({ length: samples }, (_, i) => 30 * i),
        electron,
        proton: new Float32Array(samples * 121),
      },
    },
    { trajectoryId: `t${index}`, mode: 'sweep' },
  );
}

function trade(draws: number): AssessmentInput {
  const parts = Array.from({ length: PARTS }, (_, i): PartInput => {
    const common = { partId: `p${i}`, name: `Part ${i}`, placeId: 'bay' };
    return i % 4 === 0
      ? { ...common, failureDosesKradSi: [48, 55, 60, 66, 75].map((dose) => (dose * (1 + i)) / 50) }
      : { ...common, capabilityKradSi: 1 + i, capabilityBasis: 'test' };
  });
  return toyInput({
    trajectories: Array.from({ length: CASES }, (_, i) => flyby(i)),
    cases: Array.from({ length: CASES }, (_, i) => ({
      caseId: `c${i}`,
      name: `Case ${i}`,
      legs: [{ trajectoryId: `t${i}`, repetitions: 1 }],
    })),
    options: Array.from({ length: OPTIONS }, (_, i) => ({
      optionId: `o${i}`,
      name: `Option ${i}`,
      places: [
        {
          placeId: 'bay',
          name: 'Bay',
          geometry: 'slab' as const,
          shieldText: `${i} mm`,
          massKg: i,
          response: toyResponse({
            name: `r${i}`,
            electron: (energy) => 3e-10 * Math.exp(-(((0.05 * (i + 1)) / energy) ** 1.3)),
            bremsstrahlung: (energy) => 1e-13 * energy,
            proton: (energy) => (energy > 5 + i ? 2e-9 : 0),
            sigmaRel: 0.02,
            transmitted: (energy) => 0.25 * Math.exp(-(((0.05 * (i + 1)) / energy) ** 1.3)),
          }),
        },
      ],
    })),
    parts,
    sampling: { draws, seed: 5 },
  });
}

function seconds(run: () => void): number {
  const start = performance.now();
  run();
  return (performance.now() - start) / 1e3;
}

function median(values: number[]): number {
  return values.toSorted((a, b) => a - b)[values.length >> 1];
}

export default async function bench(report: (row: Row) => void): Promise<void> {
  const few = trade(100);
  const many = trade(10_000);
  assess(few);
  const base = median([1, 2, 3].map(() => seconds(() => assess(few))));
  const full = median([1, 2, 3].map(() => seconds(() => assess(many))));
  report({ name: 'margin::assess:cases=20,options=50,parts=100,draws=100', value: base, unit: 's', limit: '2 s' });
  report({ name: 'margin::draws:n=10000,cases=20,options=50', value: full - base, unit: 's', limit: '5 s' });

  // The rival folds every draw at every bin of the grids, for one case behind all options.
  const trajectory = few.trajectories[0];
  const spectra = trajectorySpectra(trajectory);
  const draws = 2000;
  const numbers = randomNumbers(['uranus'], 5, draws);
  const belts = numbers.belts.uranus!;
  const references = {
    electron: referenceSpectrum('electron', spectra.referenceEdges.electron),
    proton: referenceSpectrum('proton', spectra.referenceEdges.proton),
  };
  const responses = few.options.map(({ places }) => places[0].response!);
  const columns = responses.map((response) => ({
    weights: {
      electron: nodeWeights(references.electron, response.electron.doseGyCm2),
      proton: nodeWeights(references.proton, response.proton.doseGyCm2),
    },
    statisticalErrorRel: 0,
    errorDeviates: null,
    constantGy: 0,
  }));
  const sampler = makeCaseSampler([{ trajectory, repetitions: 1 }], numbers);
  sampler.sample(columns, 200);
  let sink = 0;
  const ours = median(
    [1, 2, 3].map(() =>
      seconds(() => {
        for (const doses of sampler.sample(columns, draws).doses) sink += percentile(sorted(doses), 95);
      }),
    ),
  );
  const theirs = median([1, 2, 3].map(() => seconds(() => (sink += everyBin(trajectory, belts, responses, draws)))));
  if (!Number.isFinite(sink)) throw new Error('the doses were not consumed');
  report({
    name: 'margin::draws-one-case:n=2000,options=50',
    value: ours * 1e3,
    unit: 'ms',
    rival: { name: 'every bin of the grid, one draw and option at a time', value: theirs * 1e3 },
  });
}

/** Plain double loop over L and energy for every draw, then a dot product for every option: electrons only. */
function everyBin(
  trajectory: AssessmentInput['trajectories'][number],
  belts: BeltDraws,
  responses: readonly ReturnType<typeof toyResponse>[],
  draws: number,
): number {
  const { fluence } = trajectory;
  const { sigmaDex, sharedSigmaDex, side } = fluence.spread.electron;
  const spectrum = new Float64Array(91);
  const doses = responses.map(() => new Float64Array(draws));
  for (let draw = 0; draw < draws; draw++) {
    const [g, i, o, t] = belts.factors.subarray(draw * 8, draw * 8 + 4);
    const variant = draw % fluence.variants.length;
    spectrum.fill(0);
    for (let l = 0; l < L_BINS; l++) {
      const extra = Math.sqrt(Math.max(0, sigmaDex[l] ** 2 - sharedSigmaDex ** 2));
      const dex = g * sharedSigmaDex + (side[l] === 'outside' ? o : i) * extra;
      for (let edge = 0; edge < 91; edge++) {
        spectrum[edge] +=
          fluence.electron[(variant * L_BINS + l) * 91 + edge] *
          10 ** (dex + t * fluence.energySigmaDex.electron[edge]);
      }
    }
    responses.forEach(({ electron }, k) => {
      let sum = 0;
      for (let bin = 0; bin < 90; bin++) sum += electron.doseGyCm2[bin] * 0.5 * (spectrum[bin] + spectrum[bin + 1]);
      doses[k][draw] = sum;
    });
  }
  return doses.reduce((sum, values) => sum + percentile(sorted(values), 95), 0);
}
