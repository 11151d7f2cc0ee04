/** From trajectories and legs to cases that any shield can be folded with. */
import { binHistory } from '../dose/index.ts';
import { type RandomNumbers, randomNumbers } from './beltDraws.ts';
import type { PreparedCase } from './caseRows.ts';
import { makeCaseSampler } from './caseSampler.ts';
import type { AssessmentInput } from './input.ts';
import { referenceSpectrum } from './nodeWeights.ts';
import { type NominalLeg, nominalLeg, type TrajectorySpectra, trajectorySpectra } from './nominal.ts';
import { prepareSources } from './otherDose.ts';
import type { ResultNotice } from './result.ts';

export type CaseInput = Pick<AssessmentInput, 'trajectories' | 'cases' | 'otherSources' | 'sampling'>;

interface PreparedCases {
  readonly numbers: RandomNumbers;
  /** By trajectory id. */
  readonly spectra: ReadonlyMap<string, TrajectorySpectra>;
  readonly cases: readonly PreparedCase[];
  readonly notices: readonly ResultNotice[];
}

/** Everything of the left factor, made once for all shields. The input has been checked. */
export function prepareCases(input: CaseInput): PreparedCases {
  const { draws, seed } = input.sampling;
  const numbers = randomNumbers(
    input.trajectories.map(({ fluence }) => fluence.planet),
    seed,
    draws,
  );
  const spectra = new Map(input.trajectories.map((one) => [one.trajectoryId, trajectorySpectra(one)]));
  const histories = new Map(
    input.trajectories.map(({ trajectoryId, fluence }) => [
      trajectoryId,
      fluence.history === undefined || fluence.history.epochTdbS.length === 0 ? null : binHistory(fluence.history),
    ]),
  );
  const { sources, notices } = prepareSources(input.otherSources);
  const cases = input.cases.map(({ caseId, legs: flown }): PreparedCase => {
    const legs = flown.map(({ trajectoryId, repetitions }) => {
      const ofLeg = spectra.get(trajectoryId);
      if (ofLeg === undefined) throw new TypeError(`case ${caseId} names no trajectory ${trajectoryId}`);
      return nominalLeg({ trajectory: ofLeg.trajectory, repetitions }, ofLeg);
    });
    return {
      caseId,
      legs,
      sampler: makeCaseSampler(legs, numbers),
      reference: {
        electron: referenceSpectrum('electron', referenceOf(legs, 'electron')),
        proton: referenceSpectrum('proton', referenceOf(legs, 'proton')),
      },
      belts: [...new Set(legs.map(({ trajectory }) => trajectory.fluence.planet))].flatMap(
        (planet) => numbers.belts[planet] ?? [],
      ),
      histories: legs.map(({ trajectory }) => histories.get(trajectory.trajectoryId) ?? null),
      sources,
    };
  });
  return { numbers, spectra, cases, notices };
}

/** Mean over all variants of all legs: positive wherever a draw can be. */
function referenceOf(legs: readonly NominalLeg[], species: 'electron' | 'proton'): Float64Array {
  const out = new Float64Array(legs[0].spectra.referenceEdges[species].length);
  for (const { spectra, repetitions } of legs) {
    for (let i = 0; i < out.length; i++) out[i] += repetitions * spectra.referenceEdges[species][i];
  }
  return out;
}
