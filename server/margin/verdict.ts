/** The verdict on one part behind one shield, and the words for it. */
import type { ShieldGeometry, Verdict, VerdictReason } from './result.ts';

/** What a verdict is taken on. Margins are capability / dose; null where the dose is zero, which meets any margin. */
export interface VerdictInput {
  readonly requiredRdm: number;
  /** At the study's percentile. */
  readonly achievedRdmAtVerdict: number | null;
  readonly achievedRdmP50: number | null;
  readonly achievedRdmP95: number | null;
  readonly verdictPercentile: number;
  /** Share of the dose from where nothing was measured. */
  readonly extrapolatedFraction: number;
  readonly extrapolatedShareLimit: number;
  readonly geometry: ShieldGeometry;
}

/**
 * The verdict, in this order:
 *
 * 1. The required margin is met at the study's percentile: `meets`, unless the percentile lies below 95, the margin is
 *    not met at the 95th, and more than the study's limit of the dose is extrapolated: `notDemonstrated`.
 * 2. It is not met there but met at the median, while more than the limit of the dose is extrapolated:
 *    `notDemonstrated`, because what fails is the knowledge of the belts, and no sector analysis mends that.
 * 3. The capability lies below the dose: `doesNotComply`.
 * 4. The shield is a slab, sphere or shell: `needsSectorAnalysis`; with sectors or a box: `doesNotComply`.
 *
 * Only `meets` is a pass.
 */
export function verdictOf(input: VerdictInput): { readonly verdict: Verdict; readonly reason: VerdictReason } {
  const { requiredRdm } = input;
  const extrapolated = input.extrapolatedFraction > input.extrapolatedShareLimit;
  const metAt95 = meets(input.achievedRdmP95, requiredRdm);
  if (meets(input.achievedRdmAtVerdict, requiredRdm)) {
    if (input.verdictPercentile >= 95 || metAt95 || !extrapolated) {
      return { verdict: 'meets', reason: extrapolated ? 'marginMetDespiteExtrapolation' : 'marginMet' };
    }
    return { verdict: 'notDemonstrated', reason: 'metOnlyBelow95thPercentile' };
  }
  if (extrapolated && !metAt95 && meets(input.achievedRdmP50, requiredRdm)) {
    return { verdict: 'notDemonstrated', reason: 'metOnlyBelow95thPercentile' };
  }
  if (input.achievedRdmAtVerdict !== null && input.achievedRdmAtVerdict < 1) {
    return { verdict: 'doesNotComply', reason: 'capabilityBelowDose' };
  }
  return input.geometry === 'sectors' || input.geometry === 'box'
    ? { verdict: 'doesNotComply', reason: 'belowRequiredWithSectors' }
    : { verdict: 'needsSectorAnalysis', reason: 'belowRequiredBehindSimpleShield' };
}

function meets(margin: number | null, requiredRdm: number): boolean {
  return margin === null || margin >= requiredRdm;
}

export const VERDICT_REASONS: Readonly<Record<VerdictReason, string>> = {
  marginMet: 'The required margin is met at the percentile of the study.',
  marginMetDespiteExtrapolation:
    'The required margin is met at the percentile of the study, although most of the dose comes from where nothing was measured.',
  belowRequiredBehindSimpleShield:
    'The required margin is not met behind this slab, sphere or shell; refine the shielding by sectors or a box before deciding.',
  belowRequiredWithSectors: 'The required margin is not met with the shielding described by sectors or a box.',
  capabilityBelowDose: 'The capability lies below the dose at the percentile of the study.',
  metOnlyBelow95thPercentile:
    'The required margin is met at the median but not at the 95th percentile, and more of the dose than the study allows comes from where nothing was measured: the evidence carries no verdict.',
  placeMissing: 'This option has no place of the name where the part sits.',
  noResponse: 'No response of this shield could be computed.',
  noCapability: 'The part has no capability.',
  outsideValidity: 'The dose here lies outside what the models are valid for.',
};
