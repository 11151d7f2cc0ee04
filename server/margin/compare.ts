/** Two assessments beside each other: what changed in the inputs, and how far each dose and verdict moved. */
import type { AssessmentResult, MarginRow, ResultProvenance, ShieldDoseRow, Verdict } from './result.ts';

export interface InputChange {
  readonly kind: string;
  readonly name: string;
  readonly change: 'added' | 'removed' | 'changed';
}

export interface SettingChange {
  readonly setting: string;
  readonly before: string;
  readonly after: string;
}

export interface DoseChange {
  readonly caseName: string;
  readonly optionName: string;
  readonly placeName: string;
  /** Nominal total, krad(Si); null where it was or is not assessed. */
  readonly nominalBeforeKradSi: number | null;
  readonly nominalAfterKradSi: number | null;
  readonly medianBeforeKradSi: number | null;
  readonly medianAfterKradSi: number | null;
  readonly p95BeforeKradSi: number | null;
  readonly p95AfterKradSi: number | null;
  /** Nominal after / before. */
  readonly ratio: number | null;
}

/** Margin of one part at the percentile of the verdict, before and after. */
export interface MarginChange {
  readonly partName: string;
  readonly caseName: string;
  readonly optionName: string;
  readonly requiredRdmBefore: number;
  readonly requiredRdmAfter: number;
  readonly achievedRdmBefore: number | null;
  readonly achievedRdmAfter: number | null;
  readonly verdictBefore: Verdict;
  readonly verdictAfter: Verdict;
}

export interface AssessmentComparison {
  readonly sameResult: boolean;
  readonly inputs: readonly InputChange[];
  readonly settings: readonly SettingChange[];
  /** Every shield dose that stands in both, whether it moved or not. */
  readonly doses: readonly DoseChange[];
  /** Every margin that stands in both, whether it moved or not. */
  readonly margins: readonly MarginChange[];
  /** Those whose verdict changed. */
  readonly verdicts: readonly MarginChange[];
  /** Rows that stand in one of the two only: `case / option / place`. */
  readonly onlyBefore: readonly string[];
  readonly onlyAfter: readonly string[];
}

/**
 * Compares an assessment with an earlier one. Rows are matched by the names of case, option, place and part, because
 * record ids differ between studies; inputs by kind and name, then by their hash.
 */
export function compareAssessments(before: AssessmentResult, after: AssessmentResult): AssessmentComparison {
  const dosesBefore = namedDoses(before);
  const dosesAfter = namedDoses(after);
  const marginsBefore = namedMargins(before);
  const doses: DoseChange[] = [];
  for (const [key, now] of dosesAfter) {
    const then = dosesBefore.get(key);
    if (then === undefined) continue;
    const was = then.row.doseKradSi?.total ?? null;
    const is = now.row.doseKradSi?.total ?? null;
    doses.push({
      caseName: now.caseName,
      optionName: now.optionName,
      placeName: now.placeName,
      nominalBeforeKradSi: was,
      nominalAfterKradSi: is,
      medianBeforeKradSi: then.row.band?.p50 ?? null,
      medianAfterKradSi: now.row.band?.p50 ?? null,
      p95BeforeKradSi: then.row.band?.p95 ?? null,
      p95AfterKradSi: now.row.band?.p95 ?? null,
      ratio: was !== null && is !== null && was > 0 ? is / was : null,
    });
  }
  const margins: MarginChange[] = [];
  const moved = new Set<string>();
  for (const [key, now] of namedMargins(after)) {
    const then = marginsBefore.get(key);
    if (then === undefined) continue;
    if (then.placeName !== now.placeName) moved.add(now.partName);
    margins.push({
      partName: now.partName,
      caseName: now.caseName,
      optionName: now.optionName,
      requiredRdmBefore: then.row.requiredRdm,
      requiredRdmAfter: now.row.requiredRdm,
      achievedRdmBefore: then.row.achievedRdmAtVerdict,
      achievedRdmAfter: now.row.achievedRdmAtVerdict,
      verdictBefore: then.row.verdict,
      verdictAfter: now.row.verdict,
    });
  }
  return {
    sameResult: before.provenance.resultSha256 === after.provenance.resultSha256,
    inputs: [
      ...inputChanges(before.provenance, after.provenance),
      ...[...moved].map((name) => ({ kind: 'partPlace', name, change: 'changed' as const })),
    ],
    settings: settingChanges(before, after),
    doses,
    margins,
    verdicts: margins.filter(({ verdictBefore, verdictAfter }) => verdictBefore !== verdictAfter),
    onlyBefore: [...dosesBefore.keys()].filter((key) => !dosesAfter.has(key)).map(readable),
    onlyAfter: [...dosesAfter.keys()].filter((key) => !dosesBefore.has(key)).map(readable),
  };
}

function inputChanges(before: ResultProvenance, after: ResultProvenance): InputChange[] {
  const key = ({ kind, name }: { kind: string; name: string }): string => `${kind}\n${name}`;
  const was = new Map(before.inputs.map((input) => [key(input), input]));
  const is = new Map(after.inputs.map((input) => [key(input), input]));
  const changes: InputChange[] = [];
  for (const [name, input] of is) {
    const then = was.get(name);
    if (then === undefined) changes.push({ kind: input.kind, name: input.name, change: 'added' });
    else if (then.sha256 !== input.sha256) changes.push({ kind: input.kind, name: input.name, change: 'changed' });
  }
  for (const [name, input] of was) {
    if (!is.has(name)) changes.push({ kind: input.kind, name: input.name, change: 'removed' });
  }
  return changes;
}

function settingChanges(before: AssessmentResult, after: AssessmentResult): SettingChange[] {
  const settings = (result: AssessmentResult): Map<string, string> => {
    const { studyId: _, name: __, ...rules } = result.study;
    const { engineVersion, nodeVersion, architecture, seed, draws } = result.provenance;
    const out = new Map(
      Object.entries({ ...rules, engineVersion, nodeVersion, architecture, seed, draws }).map(([name, value]) => [
        name,
        String(value),
      ]),
    );
    for (const { name, environment } of result.trajectories) {
      const { phase, ...models } = environment;
      for (const [field, value] of Object.entries({ ...models, ...prefixed(phase) })) {
        out.set(`${name}: ${field}`, String(value));
      }
    }
    return out;
  };
  const was = settings(before);
  const is = settings(after);
  return [...new Set([...was.keys(), ...is.keys()])]
    .filter((name) => was.get(name) !== is.get(name))
    .map((setting) => ({ setting, before: was.get(setting) ?? 'absent', after: is.get(setting) ?? 'absent' }));
}

function prefixed(phase: Readonly<Record<string, unknown>>): Record<string, unknown> {
  return Object.fromEntries(Object.entries(phase).map(([name, value]) => [`phase.${name}`, value]));
}

interface Named {
  readonly caseName: string;
  readonly optionName: string;
}

interface Names {
  caseName(id: string): string;
  optionName(id: string): string;
  placeName(optionId: string, placeId: string): string;
}

function names(result: AssessmentResult): Names {
  const cases = new Map(result.cases.map(({ caseId, name }) => [caseId, name]));
  const options = new Map(result.options.map(({ optionId, name }) => [optionId, name]));
  const places = new Map(
    result.options.flatMap(({ optionId, places: sites }) =>
      sites.map(({ placeId, name }) => [`${optionId}\n${placeId}`, name] as const),
    ),
  );
  return {
    caseName: (id) => cases.get(id) ?? id,
    optionName: (id) => options.get(id) ?? id,
    placeName: (optionId, placeId) => places.get(`${optionId}\n${placeId}`) ?? placeId,
  };
}

function namedDoses(result: AssessmentResult): Map<string, Named & { placeName: string; row: ShieldDoseRow }> {
  const { caseName, optionName, placeName } = names(result);
  return new Map(
    result.shieldDose.map((row) => {
      const named = {
        caseName: caseName(row.caseId),
        optionName: optionName(row.optionId),
        placeName: placeName(row.optionId, row.placeId),
        row,
      };
      return [`${named.caseName}\n${named.optionName}\n${named.placeName}`, named] as const;
    }),
  );
}

function namedMargins(
  result: AssessmentResult,
): Map<string, Named & { partName: string; placeName: string; row: MarginRow }> {
  const { caseName, optionName, placeName } = names(result);
  const parts = new Map(result.parts.map(({ partId, name }) => [partId, name]));
  return new Map(
    result.margins.map((row) => {
      const named = {
        caseName: caseName(row.caseId),
        optionName: optionName(row.optionId),
        partName: parts.get(row.partId) ?? row.partId,
        placeName: placeName(row.optionId, row.placeId),
        row,
      };
      return [`${named.partName}\n${named.caseName}\n${named.optionName}`, named] as const;
    }),
  );
}

function readable(key: string): string {
  return key.split('\n').join(' / ');
}
