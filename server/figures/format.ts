/** Numbers as people read them: three significant figures, powers of ten outside 0.001 to 100000, never a bare 0. */
const SUPERSCRIPTS = '⁰¹²³⁴⁵⁶⁷⁸⁹';

export function powerOfTen(exponent: number): string {
  return `10${[...String(exponent)].map((c) => (c === '-' ? '⁻' : SUPERSCRIPTS[Number(c)])).join('')}`;
}

/** @returns an en dash for what is not known, `none` for nothing at all */
export function three(value: number | null | undefined): string {
  if (value === null || value === undefined || !Number.isFinite(value)) return '–';
  if (value === 0) return 'none';
  const magnitude = Math.abs(value);
  if (magnitude >= 1e-3 && magnitude < 1e5) {
    const digits = 2 - Math.floor(Math.log10(magnitude));
    return digits >= 0 ? value.toFixed(digits) : String(Math.round(value * 10 ** digits) / 10 ** digits);
  }
  const [mantissa, exponent] = value.toExponential(2).split('e');
  return `${mantissa}×${powerOfTen(Number(exponent))}`;
}

export function percent(share: number | null | undefined): string {
  if (share === null || share === undefined || !Number.isFinite(share)) return '–';
  const value = share * 100;
  if (value === 0) return 'none';
  if (value < 0.1) return '< 0.1 %';
  return `${value < 10 ? value.toFixed(1) : value.toFixed(0)} %`;
}
