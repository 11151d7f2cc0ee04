/**
 * The energy grids on which fluences and shield responses meet. One grid per species, so that a dose is a dot product:
 * fluence spectra are given at the edges, bin integrals and responses per bin.
 */

/** Electron kinetic energies: 90 logarithmic bins from 0.02 to 100 MeV (24.3 a decade), 91 edges. */
export const ELECTRON_EDGES_MEV: Float64Array = logarithmicEdges(0.02, 100, 90);
/** Proton kinetic energies: 120 logarithmic bins from 0.01 to 1000 MeV (24 a decade), 121 edges. */
export const PROTON_EDGES_MEV: Float64Array = logarithmicEdges(0.01, 1000, 120);

export type Species = 'electron' | 'proton';

export function edgesMeV(species: Species): Float64Array {
  return species === 'electron' ? ELECTRON_EDGES_MEV : PROTON_EDGES_MEV;
}

/** `count` + 1 edges, the first and last exact, in geometric progression. */
export function logarithmicEdges(first: number, last: number, count: number): Float64Array {
  const edges = new Float64Array(count + 1);
  const ratio = Math.log(last / first) / count;
  for (let i = 0; i <= count; i++) edges[i] = first * Math.exp(ratio * i);
  edges[count] = last;
  return edges;
}

/**
 * Integral of a positive spectrum over each bin, exact for a power law inside the bin.
 *
 * @param edges - shape (n + 1,), MeV, ascending
 * @param differential - shape (n + 1,), value per MeV at each edge, ≥ 0
 * @param out - shape (n,), value; overwritten
 * @returns `out`
 */
export function binIntegralsInto(
  edges: Float64Array,
  differential: ArrayLike<number>,
  out: Float64Array,
): Float64Array {
  for (let i = 0; i < out.length; i++) {
    const low = edges[i];
    const high = edges[i + 1];
    const fLow = differential[i];
    const fHigh = differential[i + 1];
    if (!(fLow > 0) || !(fHigh > 0)) {
      out[i] = 0.5 * (fLow + fHigh) * (high - low);
      continue;
    }
    const logRatio = Math.log(high / low);
    // ∫ f dE = (f_high E_high − f_low E_low) / (s + 1) with s the log-log slope; series where s + 1 → 0.
    const exponent = Math.log(fHigh / fLow) + logRatio;
    const mean = Math.abs(exponent) < 1e-6 ? 1 + exponent / 2 : Math.expm1(exponent) / exponent;
    out[i] = fLow * low * logRatio * mean;
  }
  return out;
}
