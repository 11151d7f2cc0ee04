/** Numbers in sentences. */

/** Significant digits without exponent for ordinary sizes, with thin spaces between thousands. */
export function shown(value: number, digits = 4): string {
  if (!Number.isFinite(value)) return String(value);
  const magnitude = Math.abs(value);
  if (magnitude !== 0 && (magnitude >= 1e9 || magnitude < 1e-3)) return value.toExponential(digits - 1);
  const whole = magnitude === 0 ? 1 : Math.floor(Math.log10(magnitude)) + 1;
  const text = value.toFixed(Math.max(0, digits - whole));
  const [integer, fraction] = text.split('.');
  const grouped = integer.replace(/\B(?=(\d{3})+$)/g, '\u202f');
  return fraction === undefined ? grouped : `${grouped}.${fraction}`;
}

/** A whole number with thin spaces between thousands. */
export function counted(value: number): string {
  return String(value).replace(/\B(?=(\d{3})+$)/g, '\u202f');
}

/** A duration in the unit a reader would choose. */
export function duration(seconds: number): string {
  if (seconds < 120) return `${shown(seconds, 3)} s`;
  if (seconds < 7200) return `${shown(seconds / 60, 3)} min`;
  if (seconds < 172_800) return `${shown(seconds / 3600, 3)} h`;
  return `${shown(seconds / 86_400, 4)} d`;
}
