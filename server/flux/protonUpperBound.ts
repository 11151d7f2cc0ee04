import { gaussLegendre } from '../numeric/gaussLegendre.ts';
import type { PlanetBelts } from './parametric.ts';
import { momentumCutoff } from './parametricModel.ts';
import { pitchAngleFactorSr } from './pitchAngle.ts';

/**
 * Upper bound on trapped protons from decaying albedo neutrons: j ∝ E⁻¹ up to the momentum limit, sin⁴α, scaled to an
 * omnidirectional flux above 10 MeV at a few L (log-linear between, none outside). A hypothesis without data.
 */
export interface ProtonUpperBound {
  directional(energyMeV: number, lShell: number, sinSquaredEquatorialPitch: number): number;
  addOmnidirectional(
    lShell: number,
    bNt: number,
    bMinNt: number,
    bLossNt: number,
    energiesMeV: Float64Array,
    out: Float64Array,
  ): void;
}

const ENERGY_MIN_MEV = 1;
const ENERGY_MAX_MEV = 1000;
const SHARPNESS = 4;
/** 4π ∫ sin⁴α sin α dα over 0 to π/2 at the magnetic equator, loss cone neglected: 4π · 8/15 sr. */
const EQUATORIAL_FACTOR_SR = (4 * Math.PI * 8) / 15;
const NODES = gaussLegendre(32);

export function protonUpperBound(belts: PlanetBelts): ProtonUpperBound {
  const { L, omniAbove10MeVPerCm2S } = belts.protonUpperBound;
  const limit = belts.protonMomentumLimitMeVcL2;

  /** j₉₀ · E at an L, cm⁻² s⁻¹ sr⁻¹. */
  const amplitude = (lShell: number): number => {
    if (lShell < L[0] || lShell > L[L.length - 1]) return 0;
    let i = 0;
    while (i < L.length - 2 && L[i + 1] < lShell) i += 1;
    const share = (lShell - L[i]) / (L[i + 1] - L[i]);
    const omni = omniAbove10MeVPerCm2S[i] * (omniAbove10MeVPerCm2S[i + 1] / omniAbove10MeVPerCm2S[i]) ** share;
    // ∫ X(E)/E dE above 10 MeV, in ln E.
    let integral = 0;
    const half = 0.5 * Math.log(ENERGY_MAX_MEV / 10);
    for (let k = 0; k < NODES.x.length; k++) {
      integral += NODES.w[k] * half * momentumCutoff(10 * Math.exp(half * (1 + NODES.x[k])), lShell, limit);
    }
    return omni / (EQUATORIAL_FACTOR_SR * integral);
  };

  const inRange = (energyMeV: number) => energyMeV >= ENERGY_MIN_MEV && energyMeV <= ENERGY_MAX_MEV;

  return {
    directional(energyMeV, lShell, sinSquaredEquatorialPitch) {
      if (!inRange(energyMeV)) return 0;
      const at90 = (amplitude(lShell) / energyMeV) * momentumCutoff(energyMeV, lShell, limit);
      return at90 * sinSquaredEquatorialPitch ** (SHARPNESS / 2);
    },
    addOmnidirectional(lShell, bNt, bMinNt, bLossNt, energiesMeV, out) {
      const scale = amplitude(lShell);
      if (scale === 0) return;
      const factorSr = pitchAngleFactorSr(SHARPNESS, bNt, bMinNt, bLossNt);
      for (let i = 0; i < energiesMeV.length; i++) {
        const energyMeV = energiesMeV[i];
        if (inRange(energyMeV)) out[i] += (factorSr * scale * momentumCutoff(energyMeV, lShell, limit)) / energyMeV;
      }
    },
  };
}
