/** The one-page result: counts, the margin that drives the design, and what would change it. */
import { countVerdicts, lowestMargin } from './comparison.ts';
import type {
  LowestMargin,
  MarginRow,
  ResultCase,
  ResultOption,
  ResultPart,
  ResultSummary,
  SensitivityRow,
  ShieldDoseRow,
} from './result.ts';
import { plural, threeDigits } from './text.ts';

interface SummaryInput {
  readonly cases: readonly ResultCase[];
  readonly options: readonly ResultOption[];
  readonly parts: readonly ResultPart[];
  readonly shieldDose: readonly ShieldDoseRow[];
  readonly margins: readonly MarginRow[];
  readonly sensitivity: readonly SensitivityRow[];
  readonly verdictPercentile: number;
}

export function summarise(input: SummaryInput): ResultSummary {
  const doses = new Map(input.shieldDose.map((row) => [placeKey(row), row]));
  const byOption = input.options.map(({ optionId }) => {
    const rows = input.margins.filter((row) => row.optionId === optionId);
    return { optionId, verdictCounts: countVerdicts(rows), lowestMargin: drivingMargin(lowestMargin(rows), doses) };
  });
  const lowest = drivingMargin(lowestMargin(input.margins), doses);
  const fractions = input.shieldDose.flatMap(({ extrapolatedFraction }) => extrapolatedFraction ?? []);
  const lightest = lightestMeeting(input.options, byOption);
  return {
    verdictCounts: countVerdicts(input.margins),
    byOption,
    lowestMargin: lowest,
    highestExtrapolatedFraction: fractions.length === 0 ? null : Math.max(...fractions),
    lightestMeetingOptionId: lightest?.optionId ?? null,
    whatWouldChange: lowest === null ? [] : whatWouldChange(input, lowest, lightest),
  };
}

function drivingMargin(
  row: ReturnType<typeof lowestMargin>,
  doses: ReadonlyMap<string, ShieldDoseRow>,
): LowestMargin | null {
  if (row === null) return null;
  const dose = doses.get(placeKey(row));
  return {
    partId: row.partId,
    caseId: row.caseId,
    optionId: row.optionId,
    placeId: row.placeId,
    achievedRdmAtVerdict: row.achievedRdmAtVerdict,
    requiredRdm: row.requiredRdm,
    verdict: row.verdict,
    worstPhaseOffsetDeg: (dose?.byPhase.length ?? 0) > 1 ? (dose?.worstPhase?.offsetDeg ?? null) : null,
    dominantUncertainty: dose?.uncertainty[0] ?? null,
    extrapolatedFraction: dose?.extrapolatedFraction ?? 0,
  };
}

/** Lightest option of known mass in which every part of every case meets its requirement. */
function lightestMeeting(
  options: readonly ResultOption[],
  byOption: ResultSummary['byOption'],
): (ResultOption & { massKg: number }) | null {
  let best: (ResultOption & { massKg: number }) | null = null;
  options.forEach((option, i) => {
    const { meets, ...others } = byOption[i].verdictCounts;
    if (meets === 0 || Object.values(others).some((count) => count > 0) || option.massKg === null) return;
    if (best === null || option.massKg < best.massKg) best = { ...option, massKg: option.massKg };
  });
  return best;
}

function whatWouldChange(
  input: SummaryInput,
  lowest: LowestMargin,
  lightest: (ResultOption & { massKg: number }) | null,
): string[] {
  const part = input.parts.find(({ partId }) => partId === lowest.partId);
  const option = input.options.find(({ optionId }) => optionId === lowest.optionId);
  const flown = input.cases.find(({ caseId }) => caseId === lowest.caseId);
  const margin = input.margins.find((row) => row.partId === lowest.partId && placeKey(row) === placeKey(lowest));
  const sensitivity = input.sensitivity.find((row) => placeKey(row) === placeKey(lowest));
  const sentences: string[] = [];
  const where = `${part?.name ?? lowest.partId} in "${option?.name ?? lowest.optionId}", case "${flown?.name ?? lowest.caseId}"`;
  const meets = lowest.verdict === 'meets';
  const neededKrad = lowest.requiredRdm * (margin?.doseAtVerdictKradSi ?? 0);
  sentences.push(
    meets
      ? `${where}, would still meet its margin of ${threeDigits(lowest.requiredRdm)} with a capability of ${threeDigits(neededKrad)} krad(Si).`
      : `${where}, would meet its margin of ${threeDigits(lowest.requiredRdm)} with a capability of ${threeDigits(neededKrad)} krad(Si).`,
  );
  const factor = sensitivity?.beltFactorAtRequirement;
  if (factor && factor.partId === lowest.partId) {
    sentences.push(
      factor.factor >= 1
        ? `Belts stronger by a factor above ${threeDigits(factor.factor)} would take this margin below its requirement.`
        : `Belts weaker by a factor of ${threeDigits(1 / factor.factor)} would bring this margin to its requirement.`,
    );
  }
  if (!meets && sensitivity?.thicker10Pct) {
    sentences.push(
      `Ten per cent more of every layer there multiplies the nominal dose by ${threeDigits(sensitivity.thicker10Pct.ratio)}.`,
    );
  }
  if (lightest !== null) {
    sentences.push(
      `The lightest option in which all parts meet their margins is "${lightest.name}" at ${threeDigits(lightest.massKg)} kg.`,
    );
  } else {
    const best = input.options
      .map((candidate) => ({
        candidate,
        open: input.margins.filter((row) => row.optionId === candidate.optionId && row.verdict !== 'meets').length,
      }))
      .toSorted((a, b) => a.open - b.open)[0];
    if (best !== undefined) {
      sentences.push(
        `No option of known mass meets every margin; "${best.candidate.name}" leaves the fewest open, ${plural(best.open, 'row')}.`,
      );
    }
  }
  return sentences;
}

function placeKey(row: { caseId: string; optionId: string; placeId: string }): string {
  return `${row.caseId}\n${row.optionId}\n${row.placeId}`;
}
