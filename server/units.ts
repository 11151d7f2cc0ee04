/**
 * Conversions at the edges. Inside, everything is km, s, nT, MeV, cm⁻², g/cm², Gy; these turn it into what
 * engineers write on drawings. All factors are exact by definition unless a source is named.
 */

/** 1 Gy = 100 rad, so 1 krad = 10 Gy (definition of the rad). */
export const GY_PER_KRAD = 10;
/** 1 mil = 0.001 inch = 25.4 µm (international inch, exact). */
export const MM_PER_MIL = 0.0254;
/** Joule per MeV: exact since the 2019 SI (e = 1.602176634e-19 C). */
export const JOULE_PER_MEV = 1.602176634e-13;
/** Absorbed dose in Gy of 1 MeV deposited per gram. */
export const GY_PER_MEV_PER_G = JOULE_PER_MEV * 1000;
export const DEG_PER_RADIAN = 180 / Math.PI;
export const RADIAN_PER_DEG = Math.PI / 180;
export const SECONDS_PER_DAY = 86_400;

export function gyToKrad(doseGy: number): number {
  return doseGy / GY_PER_KRAD;
}

/** Areal density in g/cm² of a thickness in mm at a density in g/cm³. */
export function arealDensityGPerCm2(thicknessMm: number, densityGPerCm3: number): number {
  return 0.1 * thicknessMm * densityGPerCm3;
}
