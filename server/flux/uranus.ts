import { type BeltCharacter, type BeltOptions, parametricBelts } from './parametricModel.ts';
import type { BeltModel } from './types.ts';

export const URANUS_BELTS_ID = 'uranus-belts-1';

/**
 * Electrons and protons of Uranus as met in January 1986, in L of Q3. One published spectrum (L = 4.73) carries it;
 * inside L = 4.64 nothing was ever measured.
 */
const URANUS: BeltCharacter = {
  id: URANUS_BELTS_ID,
  planet: 'uranus',
  label: 'Uranus belts of 1986, parametric',
  source:
    'Anchor: Mauk & Fox (2010), J. Geophys. Res. 115, A12220, Table 1 (L 4.73). Shape outside: Selesnick & Stone (1991), Cooper & Stone (1991), Krimigis et al. (1986), Stone et al. (1986). Inside L 4.64, and all proton levels: modelling judgement.',
  lBreaks: [4.64, 5.1, 17],
  sharedSigmaDex: { electron: 0.35, proton: 0.6 },
  anchor: { from: 4.64, to: 5.1 },
  // Bands of the source table (2.5-5, 5-10, > 10 MeV; protons 4-10, > 10 MeV) taken at their middles, linear in ln E.
  energySigmaDex: {
    electron: [
      [2.5, 0],
      [3.54, 0.2],
      [7.07, 0.4],
      [14.1, 0.8],
    ],
    proton: [
      [4, 0],
      [6.32, 0.4],
      [15.8, 1],
    ],
  },
  electronRegion(lShell, energyMeV) {
    if (lShell >= 4.64 && lShell < 5.1 && energyMeV <= 1.2) return 'anchored';
    if (lShell >= 4.64 && lShell <= 17 && energyMeV <= 2.5) return 'sampled';
    return 'extrapolated';
  },
};

export function uranusBelts(options: BeltOptions = {}): BeltModel {
  return parametricBelts(URANUS, options);
}
