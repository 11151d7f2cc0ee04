/** Options beside each other: what each costs in mass, brings in dose, and how dose moves when an input does. */
import { foldDose } from '../dose/index.ts';
import { gyToKrad } from '../units.ts';
import type { PlaceDose, PreparedCase } from './caseRows.ts';
import type { AssessedPlace } from './input.ts';
import { caseSpectra } from './nominal.ts';
import { otherDoseAt } from './otherDose.ts';
import { type ComparisonRow, type MarginRow, type SensitivityRow, VERDICTS, type Verdict } from './result.ts';
import { THICKER_FACTOR, THINNER_FACTOR } from './scaleShield.ts';

/** Rows of one case; `massKg` by option id. */
export function comparisonRows(
  places: readonly PlaceDose[],
  margins: readonly MarginRow[],
  massKg: ReadonlyMap<string, number | null>,
  baselineOptionId: string,
): ComparisonRow[] {
  const marginsAt = new Map<string, MarginRow[]>();
  for (const margin of margins) {
    const key = `${margin.optionId}\n${margin.placeId}`;
    const list = marginsAt.get(key);
    if (list === undefined) marginsAt.set(key, [margin]);
    else list.push(margin);
  }
  return places.map(({ row }) => {
    const mass = massKg.get(row.optionId) ?? null;
    const here = marginsAt.get(`${row.optionId}\n${row.placeId}`) ?? [];
    const rivals = places.filter(({ row: other }) => other.placeId === row.placeId && other !== row);
    const baseline = places.find(
      ({ row: other }) => other.optionId === baselineOptionId && other.placeId === row.placeId,
    )?.row;
    const baselineMass = massKg.get(baselineOptionId) ?? null;
    return {
      caseId: row.caseId,
      optionId: row.optionId,
      placeId: row.placeId,
      massKg: mass,
      doseKradSi: row.band,
      nonDominated:
        mass === null || row.band === null
          ? null
          : !rivals.some(({ row: other }) => beats(other.band?.p50, massKg.get(other.optionId), row.band!.p50, mass)),
      toBaseline:
        row.optionId === baselineOptionId || !baseline?.band || row.band === null
          ? null
          : {
              massKg: mass === null || baselineMass === null ? null : mass - baselineMass,
              doseKradSi: row.band.p50 - baseline.band.p50,
              doseRatio: baseline.band.p50 > 0 ? row.band.p50 / baseline.band.p50 : 1,
            },
      lowestMargin: lowest(here),
      verdictCounts: countVerdicts(here),
    };
  });
}

/** True when a rival is no worse in both and better in one. */
function beats(dose: number | undefined, mass: number | null | undefined, ownDose: number, ownMass: number): boolean {
  if (dose === undefined || mass === null || mass === undefined) return false;
  return dose <= ownDose && mass <= ownMass && (dose < ownDose || mass < ownMass);
}

export function countVerdicts(rows: readonly MarginRow[]): Record<Verdict, number> {
  const counts = Object.fromEntries(VERDICTS.map((verdict) => [verdict, 0])) as Record<Verdict, number>;
  for (const { verdict } of rows) counts[verdict]++;
  return counts;
}

/** The assessed margin that is lowest against its requirement. */
export function lowestMargin(rows: readonly MarginRow[]): (MarginRow & { achievedRdmAtVerdict: number }) | null {
  let best: (MarginRow & { achievedRdmAtVerdict: number }) | null = null;
  for (const row of rows) {
    const { achievedRdmAtVerdict } = row;
    if (achievedRdmAtVerdict === null) continue;
    if (best === null || achievedRdmAtVerdict / row.requiredRdm < best.achievedRdmAtVerdict / best.requiredRdm) {
      best = { ...row, achievedRdmAtVerdict };
    }
  }
  return best;
}

function lowest(rows: readonly MarginRow[]): ComparisonRow['lowestMargin'] {
  const row = lowestMargin(rows);
  return row === null ? null : { partId: row.partId, achievedRdmAtVerdict: row.achievedRdmAtVerdict };
}

/** How the nominal dose at one place moves with thickness, phase and belts; null where it was not assessed. */
export function sensitivityRow(
  prepared: PreparedCase,
  place: AssessedPlace,
  dose: PlaceDose,
  margins: readonly MarginRow[],
): SensitivityRow | null {
  const { row, other } = dose;
  if (row.doseKradSi === null || other === null) return null;
  const nominal = row.doseKradSi.total;
  const otherKrad = gyToKrad(other.totalGy);
  const belts = nominal - otherKrad;
  const spectra = caseSpectra(prepared.legs);
  const at = (response: AssessedPlace['response'] | undefined, factor: number): SensitivityRow['thinner10Pct'] => {
    if (response === undefined || response === null) return null;
    const moved = otherDoseAt(prepared.sources, prepared.caseId, place, response, factor);
    if (moved.refused !== null) return null;
    const doseKradSi = gyToKrad(foldDose(spectra, response).totalGy + moved.totalGy);
    return { doseKradSi, ratio: nominal > 0 ? doseKradSi / nominal : 1 };
  };
  const phases = row.byPhase.map(({ doseKradSi }) => doseKradSi + otherKrad);
  return {
    caseId: row.caseId,
    optionId: row.optionId,
    placeId: row.placeId,
    thinner10Pct: at(place.thinner10Pct, THINNER_FACTOR),
    thicker10Pct: at(place.thicker10Pct, THICKER_FACTOR),
    phase: phases.length > 1 ? { lowestKradSi: Math.min(...phases), highestKradSi: Math.max(...phases) } : null,
    beltsDoubledKradSi: otherKrad + 2 * belts,
    beltsHalvedKradSi: otherKrad + 0.5 * belts,
    beltFactorAtRequirement: beltFactor(lowestMargin(margins), otherKrad),
  };
}

/** Factor on all belt intensities at which a margin just meets its requirement; null when other sources use it up. */
function beltFactor(margin: MarginRow | null, otherKradSi: number): SensitivityRow['beltFactorAtRequirement'] {
  if (margin === null || margin.capabilityKradSi === null || margin.doseAtVerdictKradSi === null) return null;
  const belts = margin.doseAtVerdictKradSi - otherKradSi;
  const room = margin.capabilityKradSi / margin.requiredRdm - otherKradSi;
  return belts > 0 && room > 0 ? { partId: margin.partId, factor: room / belts } : null;
}
