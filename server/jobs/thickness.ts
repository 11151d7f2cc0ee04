import { readFile } from 'node:fs/promises';
import { deserialize } from 'node:v8';
import type { OtherSourceInput } from '../dose/index.ts';
import type { FluenceArtefact } from '../fluence/index.ts';
import {
  type AssessedCase,
  type PhaseTreatment,
  solveThickness,
  type ThicknessCandidate,
  type ThicknessInput,
  type ThicknessResult,
} from '../margin/index.ts';
import { type Enclosed, placeMassKg } from '../shielding/mass.ts';
import { aluminiumEquivalentMm, describeStack, normaliseStack } from '../shielding/stack.ts';
import { exposureOf, type StoredTrajectory, type Workshop } from './assessment.ts';
import { type EnvironmentRequest, environmentFor } from './environment.ts';
import type { JobContext } from './runner.ts';
import { responseOf, STANDARD_RESPONSE } from './shieldResponses.ts';

/** Shields a candidate takes on the whole: only the progress bar rests on it. */
const TRIALS_EXPECTED = 7;

/** Everything a search for a thickness rests on, copied when it is asked for. */
export interface ThicknessSnapshot {
  readonly trajectories: readonly StoredTrajectory[];
  readonly cases: readonly AssessedCase[];
  readonly otherSources: readonly OtherSourceInput[];
  readonly sampling: { readonly draws: number; readonly seed: number };
  readonly target: ThicknessInput['target'];
  readonly percentile: number | 'nominal';
  readonly phaseTreatment: PhaseTreatment;
  readonly candidates: readonly ThicknessCandidate[];
  readonly minimumMm: number;
  readonly maximumMm: number;
  /** What the stacks cover or wrap, for their masses; empty when unknown. */
  readonly enclosed: Enclosed;
  readonly environment: EnvironmentRequest;
}

/** Exposures, then as many shields as the search asks for; all of them stay in the store for assessments to come. */
export async function runThickness(
  shop: Workshop,
  snapshot: ThicknessSnapshot,
  context: JobContext,
): Promise<ThicknessResult> {
  context.progress(0, 'Following the paths through the belts');
  const trajectories = await Promise.all(
    snapshot.trajectories.map(async (trajectory) => {
      const environment = environmentFor(snapshot.environment, trajectory.planet, trajectory.startTdbS);
      const { fluencePath } = await exposureOf(shop, trajectory, environment, context);
      return {
        trajectoryId: trajectory.id,
        name: trajectory.name,
        sourceSha256: trajectory.blobSha256,
        environment,
        startTdbS: trajectory.startTdbS,
        stopTdbS: trajectory.stopTdbS,
        fluence: deserialize(await readFile(fluencePath)) as FluenceArtefact,
      };
    }),
  );
  const { cases, otherSources, sampling, target, percentile, phaseTreatment, candidates, minimumMm, maximumMm } =
    snapshot;
  const expected = candidates.length * TRIALS_EXPECTED;
  let tried = 0;
  return solveThickness(
    {
      trajectories,
      cases,
      otherSources,
      sampling,
      target,
      percentile,
      phaseTreatment,
      candidates,
      minimumMm,
      maximumMm,
    },
    {
      respond: async (stack) => {
        const report = (share: number) =>
          context.progress(
            0.2 + 0.79 * Math.min(1, (tried + share) / expected),
            `Carrying particles through ${describeStack(normaliseStack(stack))}`,
          );
        report(0);
        const { response } = await responseOf(shop, stack, STANDARD_RESPONSE, context.signal, report);
        tried += 1;
        return response;
      },
      massKg: (stack) => placeMassKg({ shield: { kind: 'stack', stack }, ...snapshot.enclosed }),
      aluminiumEquivalentMm: (stack) => aluminiumEquivalentMm(normaliseStack(stack)),
      signal: context.signal,
    },
  );
}
