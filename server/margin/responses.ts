/** Shield responses of an assessment, each used once however many options share it. */
import { edgesMeV } from '../numeric/spectrumGrid.ts';
import type { ShieldResponse } from '../shielding/types.ts';
import { drawResponseErrors } from './beltDraws.ts';
import type { AssessedPlace } from './input.ts';

export interface PreparedResponse {
  readonly response: ShieldResponse;
  /** Dose by electrons with their bremsstrahlung, per bin: the two are drawn together. */
  readonly electronGyCm2: Float64Array;
  readonly errorDeviates: Float64Array;
}

export function prepareResponse(response: ShieldResponse, seed: number, draws: number): PreparedResponse {
  const { doseGyCm2, bremsstrahlungGyCm2 } = response.electron;
  if (
    doseGyCm2.length !== edgesMeV('electron').length - 1 ||
    response.proton.doseGyCm2.length !== edgesMeV('proton').length - 1
  ) {
    throw new TypeError(`response ${response.sha256} is not on the energy grids of this version`);
  }
  return {
    response,
    electronGyCm2: Float64Array.from(doseGyCm2, (dose, bin) => dose + bremsstrahlungGyCm2[bin]),
    errorDeviates: drawResponseErrors(seed, draws, response.sha256),
  };
}

/** Why no dose can be stated at a place, or its response. */
export function usableResponse(
  place: AssessedPlace,
): { readonly response: ShieldResponse } | { readonly refused: string } {
  const { response } = place;
  if (response === null) return { refused: place.notAssessed ?? 'No response of this shield is at hand.' };
  if (place.notAssessed !== undefined) return { refused: place.notAssessed };
  if (response.targetMaterialId !== 'Si') {
    return {
      refused: `The response of this shield is for ${response.targetMaterialId}; capabilities are stated in silicon.`,
    };
  }
  return { response };
}
