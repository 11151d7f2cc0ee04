import type { AssessmentComparison, AssessmentResult } from '../margin/index.ts';
import type { TrajectorySummary } from '../trajectory/index.ts';

/** One outside check of the engine: what was compared, with what, and how closely. */
export interface EvidenceRow {
  readonly room: string;
  readonly what: string;
  readonly source: string;
  readonly ours: string;
  readonly published: string;
  readonly tolerance: string;
}

/** Everything a report prints. It draws and never computes; its dates are those given here, not the clock's. */
export interface ReportInput {
  readonly title: string;
  readonly documentNumber: string;
  readonly issue: string;
  /** ISO date of issue. */
  readonly dateIso: string;
  readonly preparer: string;
  readonly checker: string;
  readonly approver: string;
  readonly distribution: string;
  readonly result: AssessmentResult;
  readonly trajectories: readonly {
    readonly trajectoryId: string;
    readonly name: string;
    readonly sha256: string;
    readonly summary: TrajectorySummary | null;
  }[];
  readonly environments: readonly {
    readonly trajectoryId: string;
    readonly field: { readonly id: string; readonly label: string; readonly source: string } | null;
    readonly rotation: {
      readonly id: string;
      readonly label: string;
      readonly source: string;
      readonly periodH: number;
      readonly periodErrorH: number;
      /** Growth of the 1 σ phase error, degrees a year. */
      readonly sigmaDegPerYear: number;
    } | null;
    readonly belts: { readonly id: string; readonly label: string; readonly source: string };
    readonly phaseMode: string;
  }[];
  readonly evidence: readonly EvidenceRow[];
  readonly previous: {
    readonly documentNumber: string;
    readonly issue: string;
    readonly comparison: AssessmentComparison;
  } | null;
}
