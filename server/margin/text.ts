/** Numbers in sentences: three significant figures, never a bare zero for something small. */
export function threeDigits(value: number): string {
  if (value === 0) return '0';
  const magnitude = Math.abs(value);
  if (magnitude >= 1e5 || magnitude < 1e-3) return value.toExponential(2);
  return value
    .toPrecision(3)
    .replace(/\.?e\+?(\d+)$/, (_, power: string) => `e${power}`)
    .includes('e')
    ? Number(value.toPrecision(3)).toFixed(0)
    : value.toPrecision(3);
}

/** `1 part`, `3 parts`. */
export function plural(count: number, noun: string): string {
  return `${count} ${noun}${count === 1 ? '' : 's'}`;
}
