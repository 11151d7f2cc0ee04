import { readFileSync, writeFileSync } from 'node:fs';
import { deserialize, serialize } from 'node:v8';
import { fileSource } from '../../db/blobs.ts';
import { aluminiumDoseDepth } from '../dose/aluminium.ts';
import {
  adiabaticity,
  type FieldMapShard,
  type FieldMapTask,
  fieldModel,
  type SpeciesId,
  traceFieldMapShard,
} from '../field/index.ts';
import {
  computeExposure,
  type EnvironmentChoice,
  type ExposureSummary,
  type FluenceArtefact,
} from '../fluence/index.ts';
import { type BeltTable, tableBelts } from '../flux/index.ts';
import { type AssessmentInput, type AssessmentResult, assess } from '../margin/index.ts';
import { renderReport } from '../report/index.ts';
import type { ReportInput } from '../report/types.ts';
import { composeShield } from '../shielding/composeShield.ts';
import { type ResponseOptions, runShard, type ShardTally, type ShardTask } from '../shielding/response.ts';
import type { ShieldInput, ShieldResponse } from '../shielding/types.ts';
import { readTrajectory, type TrajectoryRequest, type TrajectorySummary } from '../trajectory/index.ts';
import type { SummaryRequest } from './assessment.ts';
import { type EncounterInput, encounterView } from './encounter.ts';
import { type EvaluateFieldInput, evaluateField, type SamplePathInput, samplePath } from './pathSampling.ts';

/** What a worker can be asked for; every task and answer is a plain serialisable value. */
export type WorkerTask =
  | { readonly kind: 'readTrajectory'; readonly filePath: string; readonly request: TrajectoryRequest }
  | {
      readonly kind: 'exposure';
      readonly filePath: string;
      readonly request: TrajectoryRequest;
      readonly environment: EnvironmentChoice;
      readonly summary: SummaryRequest;
      /** File of the uploaded belt table; null with built-in belts. */
      readonly beltTablePath: string | null;
      /** Where to write the fluence artefact. */
      readonly outPath: string;
    }
  | { readonly kind: 'shard'; readonly task: ShardTask }
  | {
      readonly kind: 'composeShield';
      readonly shield: ShieldInput;
      readonly options: ResponseOptions;
      readonly responsePaths: readonly string[];
    }
  | { readonly kind: 'fieldMapShard'; readonly task: FieldMapTask }
  | { readonly kind: 'assess'; readonly order: AssessOrder }
  | ({ readonly kind: 'samplePath'; readonly filePath: string; readonly request: TrajectoryRequest } & SamplePathInput)
  | ({ readonly kind: 'encounter'; readonly filePath: string; readonly request: TrajectoryRequest } & EncounterInput)
  | ({ readonly kind: 'evaluateField' } & EvaluateFieldInput)
  | {
      readonly kind: 'adiabaticity';
      readonly fieldModelId: string;
      readonly species: SpeciesId;
      readonly energyMeV: number;
      readonly lShells: readonly number[];
      readonly equatorialPitchAngleDeg: number;
    }
  | { readonly kind: 'report'; readonly input: ReportInput };

/** An assessment whose large arrays are still files. */
export interface AssessOrder {
  readonly input: Omit<AssessmentInput, 'trajectories' | 'options' | 'doseDepthTables'>;
  readonly trajectories: readonly (Omit<AssessmentInput['trajectories'][number], 'fluence'> & {
    readonly fluencePath: string;
  })[];
  readonly options: readonly (Omit<AssessmentInput['options'][number], 'places'> & {
    readonly places: readonly (Omit<
      AssessmentInput['options'][number]['places'][number],
      'response' | 'thinner10Pct' | 'thicker10Pct'
    > & {
      readonly responsePath: string | null;
      /** The same shield with every layer 10 % thinner and thicker; null where not asked for. */
      readonly thinnerPath: string | null;
      readonly thickerPath: string | null;
      readonly otherTargetPaths: readonly string[];
    })[];
  })[];
}

export type WorkerAnswer<K extends WorkerTask['kind']> = K extends 'readTrajectory'
  ? { summary: TrajectorySummary; startTdbS: number; stopTdbS: number; pathSha256: string }
  : K extends 'exposure'
    ? ExposureSummary
    : K extends 'shard'
      ? ShardTally
      : K extends 'fieldMapShard'
        ? FieldMapShard
        : K extends 'composeShield'
          ? ShieldResponse
          : K extends 'assess'
            ? AssessmentResult
            : K extends 'report'
              ? Uint8Array
              : unknown;

export default async function work(task: WorkerTask): Promise<unknown> {
  switch (task.kind) {
    case 'readTrajectory':
      return withTrajectory(task.filePath, task.request, ({ summary, path }) => ({
        summary,
        startTdbS: path.spans[0].startTdbS,
        stopTdbS: path.spans[path.spans.length - 1].stopTdbS,
        pathSha256: path.inputsSha256,
      }));
    case 'exposure':
      return withTrajectory(task.filePath, task.request, ({ path }) => {
        const { artefact, summary } = computeExposure(path, task.environment, {
          ...task.summary,
          ...(task.beltTablePath === null
            ? {}
            : { belts: tableBelts(task.environment.beltModelId, readTable(task.beltTablePath)) }),
        });
        writeFileSync(task.outPath, serialize(artefact));
        return summary;
      });
    case 'shard':
      return runShard(task.task);
    case 'composeShield':
      return composeShield(task.shield, task.options, task.responsePaths.map(readResponse));
    case 'fieldMapShard':
      return traceFieldMapShard(task.task);
    case 'assess':
      return assess(fillOrder(task.order));
    case 'samplePath':
      return withTrajectory(task.filePath, task.request, ({ path }) => samplePath(path, task));
    case 'encounter':
      return withTrajectory(task.filePath, task.request, ({ path }) => encounterView(path, task));
    case 'evaluateField':
      return evaluateField(task);
    case 'adiabaticity': {
      const { species, energyMeV, lShells, equatorialPitchAngleDeg } = task;
      return {
        items: adiabaticity(fieldModel(task.fieldModelId), species, energyMeV, lShells, equatorialPitchAngleDeg),
        nextCursor: null,
      };
    }
    case 'report':
      return renderReport(task.input);
  }
}

function withTrajectory<T>(
  filePath: string,
  request: TrajectoryRequest,
  use: (reading: ReturnType<typeof readTrajectory>) => T,
): T {
  const source = fileSource(filePath);
  try {
    return use(readTrajectory(source, request));
  } finally {
    source.close();
  }
}

function readTable(path: string): BeltTable {
  return JSON.parse(readFileSync(path, 'utf8')) as BeltTable;
}

function readResponse(path: string): ShieldResponse {
  return deserialize(readFileSync(path)) as ShieldResponse;
}

function fillOrder(order: AssessOrder): AssessmentInput {
  const responses = new Map<string, ShieldResponse>();
  const responseAt = (path: string | null): ShieldResponse | null => {
    if (path === null) return null;
    const response = responses.get(path) ?? readResponse(path);
    responses.set(path, response);
    return response;
  };
  return {
    ...order.input,
    trajectories: order.trajectories.map(({ fluencePath, ...rest }) => ({
      ...rest,
      fluence: deserialize(readFileSync(fluencePath)) as FluenceArtefact,
    })),
    options: order.options.map((option) => ({
      ...option,
      places: option.places.map(({ responsePath, thinnerPath, thickerPath, otherTargetPaths, ...place }) => {
        const thinner10Pct = responseAt(thinnerPath);
        const thicker10Pct = responseAt(thickerPath);
        return {
          ...place,
          response: responseAt(responsePath),
          ...(thinner10Pct === null ? {} : { thinner10Pct }),
          ...(thicker10Pct === null ? {} : { thicker10Pct }),
          otherTargets: otherTargetPaths.flatMap((path) => responseAt(path) ?? []),
        };
      }),
    })),
    doseDepthTables: [aluminiumDoseDepth('slab'), aluminiumDoseDepth('sphere')],
  };
}
