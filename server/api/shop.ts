import { Artefacts } from '../../db/artefacts.ts';
import { Blobs } from '../../db/blobs.ts';
import type { StoredDocument } from '../../db/documents.ts';
import { Documents, type DocumentTable } from '../../db/documents.ts';
import type { Store } from '../../db/open.ts';
import { AppError } from '../errors.ts';
import type { EnvironmentChoice } from '../fluence/index.ts';
import {
  exposureOf,
  runAssessment,
  type StoredTrajectory,
  type SummaryRequest,
  type Workshop,
} from '../jobs/assessment.ts';
import type { Pool } from '../jobs/pool.ts';
import { type JobHandler, Runner } from '../jobs/runner.ts';
import { shieldResponseOf } from '../jobs/shieldResponses.ts';
import type { AssessmentSnapshot, SnapshotPlace } from '../jobs/snapshot.ts';
import { runThickness, type ThicknessSnapshot } from '../jobs/thickness.ts';
import type { PartInput } from '../margin/index.ts';
import { describeShield } from '../shielding/shieldPlan.ts';
import type { StackInput } from '../shielding/types.ts';
import type { TrajectorySummary } from '../trajectory/index.ts';
import type { BeltTableBody } from './beltModels.ts';
import type { ResponseOrder } from './responses.ts';

export interface StudyBody {
  readonly description: string;
  readonly requiredRdm: number;
  readonly verdictPercentile: number;
  readonly phaseTreatment: 'joint' | 'worst';
  readonly extrapolatedShareLimit: number;
  readonly distributionMark: string;
}

export interface TrajectoryBody {
  readonly summary: TrajectorySummary;
  readonly request: StoredTrajectory['request'];
  readonly startTdbS: number;
  readonly stopTdbS: number;
  readonly pathSha256: string;
}

export interface OptionBody {
  readonly places: readonly SnapshotPlace[];
}

export interface CaseBody {
  readonly legs: readonly { readonly trajectoryId: string; readonly repetitions: number }[];
}

export interface AssessmentBody {
  readonly jobId: string;
  readonly snapshot: AssessmentSnapshot;
}

export interface ReportBody {
  readonly assessmentId: string;
  readonly documentNumber: string;
  readonly issue: string;
  readonly dateUtc: string;
  readonly pdfSha256: string;
  readonly resultSha256: string;
}

/** Everything the calls share: the store's repositories, the queue, the pool. */
export class Shop implements Workshop {
  readonly store: Store;
  readonly pool: Pool;
  readonly blobs: Blobs;
  readonly artefacts: Artefacts;
  readonly studies: Documents<StudyBody>;
  readonly trajectories: Documents<TrajectoryBody>;
  readonly cases: Documents<CaseBody>;
  readonly stacks: Documents<StackInput>;
  readonly options: Documents<OptionBody>;
  readonly parts: Documents<PartInput>;
  readonly assessments: Documents<AssessmentBody>;
  readonly reports: Documents<ReportBody>;
  readonly beltTables: Documents<BeltTableBody>;
  readonly runner: Runner;

  constructor(store: Store, dataDir: string, pool: Pool, onDefect: (error: unknown) => void) {
    this.store = store;
    this.pool = pool;
    this.blobs = new Blobs(dataDir);
    this.artefacts = new Artefacts(store, this.blobs);
    const documents = <T>(table: DocumentTable) => new Documents<T>(store, table);
    this.studies = documents('studies');
    this.trajectories = documents('trajectories');
    this.cases = documents('cases');
    this.stacks = documents('stacks');
    this.options = documents('options');
    this.parts = documents('parts');
    this.assessments = documents('assessments');
    this.reports = documents('reports');
    this.beltTables = documents('beltTables');
    const handlers = new Map<string, JobHandler>([
      ['assessment', (input, context) => runAssessment(this, this.assessments, (input as { id: string }).id, context)],
      ['thickness', (input, context) => runThickness(this, input as ThicknessSnapshot, context)],
      [
        'exposure',
        async (input, context) => {
          const { trajectoryId, environment, summary } = input as {
            trajectoryId: string;
            environment: EnvironmentChoice;
            summary?: SummaryRequest;
          };
          context.progress(0.05, 'Following the path through the belts');
          const trajectory = this.storedTrajectory(trajectoryId);
          const { key, summaryKey } = await exposureOf(this, trajectory, environment, context, summary);
          return { key, summaryKey };
        },
      ],
      [
        'response',
        async (input, context) => {
          const { shield, options } = input as ResponseOrder;
          const text = describeShield(shield);
          const { response } = await shieldResponseOf(this, shield, options, context.signal, (share) =>
            context.progress(share, `Carrying particles through ${text}`),
          );
          return { sha256: response.sha256, referenceErrorRel: response.referenceErrorRel };
        },
      ],
    ]);
    this.runner = new Runner(store, handlers, onDefect);
  }

  storedTrajectory(id: string): StoredTrajectory {
    const document = found(this.trajectories.get(id), 'trajectory', id);
    return {
      id,
      name: document.name,
      blobSha256: this.trajectories.column(id, 'blobSha256')!,
      request: document.body.request,
      planet: document.body.summary.planet,
      startTdbS: document.body.startTdbS,
      stopTdbS: document.body.stopTdbS,
      pathSha256: document.body.pathSha256,
    };
  }
}

/** @throws {AppError} NOT_FOUND naming what was looked for */
export function found<T>(document: T | undefined, what: string, id: string): T {
  if (document === undefined) {
    throw new AppError('NOT_FOUND', `No ${what} has the id "${id}".`, [
      { field: `${what}Id`, detail: 'not stored', got: id },
    ]);
  }
  return document;
}

/** A document as it goes on the wire: its own fields beside the stored ones. */
export function onWire<T extends object>(document: StoredDocument<T>): Record<string, unknown> {
  const { id, studyId, name, createdUtc, version, body } = document;
  return { ...body, id, studyId, name, createdUtc, version };
}
