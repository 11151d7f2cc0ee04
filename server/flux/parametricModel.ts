import type { PlanetId } from '../constants/planets.ts';
import type { Species } from '../numeric/spectrumGrid.ts';
import { logShape, makeSpectrumAtL, planetBelts, SpeciesProfile } from './parametric.ts';
import { pitchAngleFactorSr } from './pitchAngle.ts';
import { protonUpperBound } from './protonUpperBound.ts';
import type { BeltModel, BeltSpread, EvidenceRegion } from './types.ts';

/** m_p c², MeV: CODATA 2018. */
const PROTON_REST_MEV = 938.27208816;

export interface BeltOptions {
  /** Satellite absorption dips; off by default, which is conservative for dose. */
  readonly satelliteDips?: boolean;
  /** Adds the albedo-neutron hypothesis to the protons: a scenario, never part of the draws. */
  readonly protonUpperBound?: boolean;
  /** Shift of all electron intensities, decades; 0 is the state in which the belts were seen. */
  readonly electronOffsetDex?: number;
}

/** What differs from planet to planet, beside the tables. */
export interface BeltCharacter {
  readonly id: string;
  readonly planet: PlanetId;
  readonly label: string;
  readonly source: string;
  readonly lBreaks: readonly number[];
  readonly sharedSigmaDex: Readonly<Record<Species, number>>;
  readonly anchor: { readonly from: number; readonly to: number };
  /** (energy, σ_E) pairs, ascending; linear in ln E between, constant outside. */
  readonly energySigmaDex: Readonly<Record<Species, readonly (readonly [number, number])[]>>;
  readonly electronRegion: (lShell: number, energyMeV: number) => EvidenceRegion;
}

export function parametricBelts(character: BeltCharacter, options: BeltOptions = {}): BeltModel {
  const belts = planetBelts(character.planet);
  const profiles = { electron: new SpeciesProfile(belts.electron), proton: new SpeciesProfile(belts.proton) };
  const offset = (options.electronOffsetDex ?? 0) * Math.LN10;
  const dips = options.satelliteDips === true ? belts.dips : [];
  const upper = options.protonUpperBound === true ? protonUpperBound(belts) : null;
  const state = makeSpectrumAtL();

  /** Product of the dips at an energy: full above 0.2 MeV, none at 0.1 MeV, in between linear in ln E. */
  const dipFactor = (energyMeV: number, lShell: number): number => {
    if (dips.length === 0 || energyMeV <= 0.1) return 1;
    const strength = Math.min(1, Math.log(energyMeV / 0.1) / Math.LN2);
    let factor = 1;
    for (const dip of dips) {
      factor *= 1 - strength * (1 - dip.d) * Math.exp(-0.5 * ((lShell - dip.Lc) / dip.w) ** 2);
    }
    return factor;
  };

  const insideDip = (lShell: number) => dips.some((dip) => Math.abs(lShell - dip.Lc) < dip.w);

  /** Equatorial 90° intensity for the parameters in `state`. */
  const perpendicular = (species: Species, energyMeV: number, lShell: number): number => {
    const profile = profiles[species];
    if (energyMeV < profile.energyMinMeV || energyMeV > profile.energyMaxMeV) return 0;
    const shape = logShape(energyMeV, state);
    if (species === 'electron') {
      const cutoff = (energyMeV / belts.electronCutoffMeV) ** 2;
      return Math.exp(shape - cutoff + offset) * dipFactor(energyMeV, lShell);
    }
    return Math.exp(shape) * momentumCutoff(energyMeV, lShell, belts.protonMomentumLimitMeVcL2);
  };

  const sharpness = (species: Species, lShell: number) =>
    species === 'electron' && insideDip(lShell) ? state.n / 2 : state.n;

  return {
    id: character.id,
    planet: character.planet,
    label: character.label,
    source: character.source,
    species: ['electron', 'proton'],
    lMin: Math.min(profiles.electron.lMin, profiles.proton.lMin),
    lMax: Math.max(profiles.electron.lMax, profiles.proton.lMax),
    lBreaks: character.lBreaks,
    directional(species, energyMeV, lShell, sinSquaredEquatorialPitch) {
      const extra =
        species === 'proton' && upper !== null ? upper.directional(energyMeV, lShell, sinSquaredEquatorialPitch) : 0;
      profiles[species].atInto(lShell, state);
      if (!state.inside) return extra;
      return (
        perpendicular(species, energyMeV, lShell) * sinSquaredEquatorialPitch ** (sharpness(species, lShell) / 2) +
        extra
      );
    },
    omnidirectionalInto(species, lShell, bNt, bMinNt, bLossNt, energiesMeV, out) {
      out.fill(0);
      profiles[species].atInto(lShell, state);
      if (state.inside) {
        const factorSr = pitchAngleFactorSr(sharpness(species, lShell), bNt, bMinNt, bLossNt);
        if (factorSr > 0) {
          for (let i = 0; i < energiesMeV.length; i++)
            out[i] = factorSr * perpendicular(species, energiesMeV[i], lShell);
        }
      }
      if (species === 'proton' && upper !== null)
        upper.addOmnidirectional(lShell, bNt, bMinNt, bLossNt, energiesMeV, out);
      return out;
    },
    region(species, lShell, energyMeV) {
      // No absolute proton intensity was ever published for either planet: every proton is extrapolated.
      return species === 'electron' ? character.electronRegion(lShell, energyMeV) : 'extrapolated';
    },
    spread(species, lShell): BeltSpread {
      profiles[species].atInto(Math.min(Math.max(lShell, profiles[species].lMin), profiles[species].lMax), state);
      const { from, to } = character.anchor;
      const side = lShell < from ? 'inside' : lShell < to ? 'anchor' : 'outside';
      return { sigmaDex: state.sigmaDex, side };
    },
    sharedSigmaDex: (species) => character.sharedSigmaDex[species],
    energySigmaDex: (species, energyMeV) => interpolateLogE(character.energySigmaDex[species], energyMeV),
  };
}

/** 1/(1 + (p/p_max)⁶) with p_max = K/L²: adiabatic trapping ends where the gyroradius nears the curvature of the line. */
export function momentumCutoff(energyMeV: number, lShell: number, limitMeVcL2: number): number {
  const momentum = Math.sqrt(energyMeV * (energyMeV + 2 * PROTON_REST_MEV));
  return 1 / (1 + ((momentum * lShell * lShell) / limitMeVcL2) ** 6);
}

function interpolateLogE(pairs: readonly (readonly [number, number])[], energyMeV: number): number {
  if (energyMeV <= pairs[0][0]) return pairs[0][1];
  for (let i = 1; i < pairs.length; i++) {
    const [e1, s1] = pairs[i];
    if (energyMeV <= e1) {
      const [e0, s0] = pairs[i - 1];
      return s0 + ((s1 - s0) * Math.log(energyMeV / e0)) / Math.log(e1 / e0);
    }
  }
  return pairs[pairs.length - 1][1];
}
