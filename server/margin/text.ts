/** Numbers in sentences: three significant figures. */
export function threeDigits(value: number): string {
  const rounded = Number(value.toPrecision(3));
  const magnitude = Math.abs(rounded);
  if (magnitude !== 0 && (magnitude >= 1e5 || magnitude < 1e-3)) return value.toExponential(2);
  // From 1000 on, toPrecision would switch to an exponent.
  return magnitude >= 1000 ? String(rounded) : value.toPrecision(3);
}

/** `1 part`, `3 parts`. */
export function plural(count: number, noun: string): string {
  return `${count} ${noun}${count === 1 ? '' : 's'}`;
}
