/**
 * Tables over energy with 16 rows an octave: the row is the exponent and the four leading mantissa bits of the energy in
 * single precision, the fraction its other bits, so that a look-up needs neither logarithm nor search.
 */
const ROWS_PER_OCTAVE = 16;
/** The tables span 2^−10 to 2^7 MeV. */
const LOWEST_EXPONENT = -10;
const HIGHEST_EXPONENT = 7;

/** First row of the tables in units of the shifted bit pattern, and shift and mask of the look-up. */
export const ROW_BASE = (127 + LOWEST_EXPONENT) * ROWS_PER_OCTAVE;
export const ROW_SHIFT = 19;
export const FRACTION_MASK = 0x7ffff;
export const FRACTION_SCALE = 1 / 0x80000;
/** Rows including the closing one. */
export const ROW_COUNT = (HIGHEST_EXPONENT - LOWEST_EXPONENT) * ROWS_PER_OCTAVE + 1;

export function rowEnergyMeV(row: number): number {
  const octave = Math.floor(row / ROWS_PER_OCTAVE);
  return 2 ** (LOWEST_EXPONENT + octave) * (1 + (row - octave * ROWS_PER_OCTAVE) / ROWS_PER_OCTAVE);
}

const INVERSE_WIDTH = Float64Array.from(
  { length: ROW_COUNT },
  (_, row) => 1 / (rowEnergyMeV(row + 1) - rowEnergyMeV(row)),
);

/** One over the width of a row, 1/MeV. */
export function inverseRowWidth(row: number): number {
  return INVERSE_WIDTH[row];
}

/** A float and its bits: `bits.float[0] = energy`, then row and fraction from `bits.int[0]`. */
export function makeBits(): { readonly float: Float32Array; readonly int: Int32Array } {
  const float = new Float32Array(1);
  return { float, int: new Int32Array(float.buffer) };
}
