import { type BeltCharacter, type BeltOptions, parametricBelts } from './parametricModel.ts';
import type { BeltModel } from './types.ts';

export const NEPTUNE_BELTS_ID = 'neptune-belts-1';

/** Electrons and protons of Neptune as met in August 1989, in L of O8; one published spectrum (L = 7.4) carries it. */
const NEPTUNE: BeltCharacter = {
  id: NEPTUNE_BELTS_ID,
  planet: 'neptune',
  label: 'Neptune belts of 1989, parametric',
  source:
    'Anchor: Mauk & Fox (2010), J. Geophys. Res. 115, A12220, Table 1 (L 7.4). Shape outside: Stone et al. (1989), Selesnick & Stone (1991). Inside L 6, and all proton levels: modelling judgement.',
  lBreaks: [2, 6, 6.7, 8.2, 14.3],
  sharedSigmaDex: { electron: 0.3, proton: 0.8 },
  anchor: { from: 6.7, to: 8.2 },
  energySigmaDex: {
    electron: [
      [5, 0],
      [7.07, 0.3],
      [14.1, 0.7],
    ],
    proton: [
      [4, 0],
      [6.32, 0.4],
      [15.8, 1],
    ],
  },
  electronRegion(lShell, energyMeV) {
    if (energyMeV > 5) return 'extrapolated';
    if (lShell >= 6.7 && lShell < 8.2) return 'anchored';
    if (lShell >= 6 && lShell <= 14.3) return 'sampled';
    if (lShell >= 2 && lShell < 6) return 'sampledQualitative';
    return 'extrapolated';
  },
};

export function neptuneBelts(options: BeltOptions = {}): BeltModel {
  return parametricBelts(NEPTUNE, options);
}
