/** Margin and verdict of every part in every option and case. */
import { gyToKrad } from '../units.ts';
import type { PlaceDose } from './caseRows.ts';
import type { AssessmentInput } from './input.ts';
import type { PreparedPart } from './parts.ts';
import { probabilityAbove } from './percentiles.ts';
import type { MarginRow, ShieldGeometry, VerdictReason } from './result.ts';
import { verdictOf } from './verdict.ts';

/** Where the parts of one option in one case sit. */
export interface OptionDoses {
  readonly caseId: string;
  readonly optionId: string;
  /** By place id; a bare stack has one place that holds every part. */
  readonly places: ReadonlyMap<string, { readonly dose: PlaceDose; readonly geometry: ShieldGeometry }>;
  readonly holdsAllParts: boolean;
}

/**
 * Margins of all parts in one option and case.
 *
 * Margins use the capability (for a lot its tolerance limit), probabilities the predictive distribution of the lot.
 */
export function marginRows(
  parts: readonly PreparedPart[],
  option: OptionDoses,
  study: AssessmentInput['study'],
): MarginRow[] {
  return parts.map((part) => {
    const { row } = part;
    const site = option.holdsAllParts ? [...option.places.values()][0] : option.places.get(row.placeId);
    if (site === undefined) return refused(part, option, row.placeId, 'placeMissing');
    const { placeId } = site.dose.row;
    if (row.capabilityKradSi === null) return refused(part, option, placeId, 'noCapability');
    const { band, doseAtVerdictKradSi, extrapolatedFraction } = site.dose.row;
    if (site.dose.samples === null || site.dose.other === null || band === null || doseAtVerdictKradSi === null) {
      return refused(part, option, placeId, site.dose.refusedBySource ? 'outsideValidity' : 'noResponse');
    }
    const capability = row.capabilityKradSi;
    const achievedRdm = marginOf(capability, band.p50);
    const achievedRdmP95 = marginOf(capability, band.p95);
    const achievedRdmAtVerdict = marginOf(capability, doseAtVerdictKradSi);
    const { verdict, reason } = verdictOf({
      requiredRdm: row.requiredRdm,
      achievedRdmAtVerdict,
      achievedRdmP50: achievedRdm,
      achievedRdmP95,
      verdictPercentile: study.verdictPercentile,
      extrapolatedFraction: extrapolatedFraction ?? 0,
      extrapolatedShareLimit: study.extrapolatedShareLimit,
      geometry: site.geometry,
    });
    const doses = site.dose.samples.jointGy;
    const otherKrad = gyToKrad(site.dose.other.totalGy);
    return {
      partId: row.partId,
      caseId: option.caseId,
      optionId: option.optionId,
      placeId,
      capabilityKradSi: capability,
      doseKradSi: band.p50,
      doseP95KradSi: band.p95,
      doseAtVerdictKradSi,
      requiredRdm: row.requiredRdm,
      achievedRdm,
      achievedRdmP95,
      achievedRdmAtVerdict,
      probabilityAboveDose: probabilityAbove(doses, part.capabilityPointsKradSi, 1, otherKrad),
      confidence: probabilityAbove(doses, part.capabilityPointsKradSi, row.requiredRdm, otherKrad),
      verdict,
      reason,
    };
  });
}

/** Capability over dose; null where there is no dose, which any capability stands. */
function marginOf(capabilityKradSi: number, doseKradSi: number): number | null {
  return doseKradSi > 0 ? capabilityKradSi / doseKradSi : null;
}

function refused(part: PreparedPart, option: OptionDoses, placeId: string, reason: VerdictReason): MarginRow {
  const { row } = part;
  return {
    partId: row.partId,
    caseId: option.caseId,
    optionId: option.optionId,
    placeId,
    capabilityKradSi: row.capabilityKradSi,
    doseKradSi: null,
    doseP95KradSi: null,
    doseAtVerdictKradSi: null,
    requiredRdm: row.requiredRdm,
    achievedRdm: null,
    achievedRdmP95: null,
    achievedRdmAtVerdict: null,
    probabilityAboveDose: null,
    confidence: null,
    verdict: 'notAssessed',
    reason,
  };
}
