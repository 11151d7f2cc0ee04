/** Dose of the other sources at one place in one case. */
import { type FluenceSpectra, foldDose, type OtherSourceInput, otherSpectra, readDoseDepth } from '../dose/index.ts';
import { AppError } from '../errors.ts';
import type { ShieldResponse } from '../shielding/types.ts';
import { GY_PER_KRAD } from '../units.ts';
import type { AssessedPlace } from './input.ts';
import type { ResultNotice } from './result.ts';

/** An other source with its spectrum on the response grids, made once. */
export interface PreparedSource {
  readonly input: OtherSourceInput;
  readonly spectra: FluenceSpectra | null;
}

export function prepareSources(sources: readonly OtherSourceInput[]): {
  readonly sources: readonly PreparedSource[];
  readonly notices: readonly ResultNotice[];
} {
  const notices: ResultNotice[] = [];
  const prepared = sources.map((input) => {
    if (input.fluence === undefined) return { input, spectra: null };
    const { spectra, notices: texts } = otherSpectra(input.fluence);
    for (const text of texts)
      notices.push({ code: 'OTHER_FLUENCE_CUT', severity: 'caution', text: `${input.name}: ${text}` });
    return { input, spectra };
  });
  return { sources: prepared, notices };
}

export interface OtherDose {
  readonly bySource: readonly { readonly name: string; readonly phase: string; readonly doseGy: number }[];
  readonly totalGy: number;
  /** Why a source could not be read here, null when all could. */
  readonly refused: string | null;
}

/**
 * Adds up what the other sources bring at a place.
 *
 * @param thicknessFactor - scales the aluminium equivalents for the thickness sensitivity
 */
export function otherDoseAt(
  sources: readonly PreparedSource[],
  caseId: string,
  place: Pick<AssessedPlace, 'aluminiumEquivalent'>,
  response: ShieldResponse,
  thicknessFactor = 1,
): OtherDose {
  const bySource: { name: string; phase: string; doseGy: number }[] = [];
  let refused: string | null = null;
  for (const { input, spectra } of sources) {
    if (input.caseIds !== undefined && !input.caseIds.includes(caseId)) continue;
    let doseGy = 0;
    if (spectra !== null) doseGy = foldDose(spectra, response).totalGy;
    else if (input.doseKradSi !== undefined) doseGy = input.doseKradSi * GY_PER_KRAD;
    else if (input.doseDepth !== undefined) {
      if (place.aluminiumEquivalent === undefined) {
        refused = `The dose-depth table of "${input.name}" needs the aluminium equivalent of this shield, which is not known.`;
        continue;
      }
      try {
        for (const { weight, thicknessMm } of place.aluminiumEquivalent) {
          const { depthsMm, doseKradSi } = input.doseDepth;
          doseGy += weight * GY_PER_KRAD * readDoseDepth(depthsMm, doseKradSi, thicknessMm * thicknessFactor);
        }
      } catch (error) {
        if (!(error instanceof AppError)) throw error;
        refused = `${input.name}: ${error.message}`;
        continue;
      }
    }
    bySource.push({ name: input.name, phase: input.phase, doseGy });
  }
  return { bySource, totalGy: bySource.reduce((sum, { doseGy }) => sum + doseGy, 0), refused };
}

/** Spectra of the other sources of a case that are given as fluence: they also damage and charge. */
export function otherFluences(sources: readonly PreparedSource[], caseId: string): FluenceSpectra[] {
  return sources
    .filter(({ input }) => input.caseIds === undefined || input.caseIds.includes(caseId))
    .flatMap(({ spectra }) => (spectra === null ? [] : [spectra]));
}
