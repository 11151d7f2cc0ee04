import { textOf } from './lines.ts';

/** 10⁰ … 10²², the powers of ten that a double holds exactly. */
const EXACT_POWERS = Float64Array.from({ length: 23 }, (_, i) => Number(`1e${i}`));
const LARGEST_EXACT_INTEGER = 2 ** 53;

/**
 * Number of a decimal text in bytes: `[+-]digits[.digits][(e|E)[+-]digits]`, with digits on at least one side of the
 * point. Correctly rounded: where mantissa and power of ten are both exact one division or product rounds once
 * (Clinger 1990), everything else goes through the language.
 *
 * @returns NaN for anything else, also for `NaN`, `Infinity` and numbers too large for a double
 */
export function decimalOfBytes(bytes: Uint8Array, start: number, end: number): number {
  let i = start;
  let negative = false;
  if (i < end && (bytes[i] === 0x2d || bytes[i] === 0x2b)) negative = bytes[i++] === 0x2d;
  let mantissa = 0;
  let digitCount = 0;
  let scale = 0;
  let seenPoint = false;
  for (; i < end; i++) {
    const digit = bytes[i] - 0x30;
    if (digit >= 0 && digit <= 9) {
      mantissa = mantissa * 10 + digit;
      digitCount++;
      if (seenPoint) scale--;
    } else if (bytes[i] === 0x2e && !seenPoint) {
      seenPoint = true;
    } else break;
  }
  if (digitCount === 0) return Number.NaN;
  if (i < end) {
    if (bytes[i] !== 0x65 && bytes[i] !== 0x45) return Number.NaN;
    i++;
    let negativeExponent = false;
    if (i < end && (bytes[i] === 0x2d || bytes[i] === 0x2b)) negativeExponent = bytes[i++] === 0x2d;
    if (i === end || end - i > 4) return Number.NaN;
    let exponent = 0;
    for (; i < end; i++) {
      const digit = bytes[i] - 0x30;
      if (!(digit >= 0 && digit <= 9)) return Number.NaN;
      exponent = exponent * 10 + digit;
    }
    scale += negativeExponent ? -exponent : exponent;
  }
  if (mantissa < LARGEST_EXACT_INTEGER && scale >= -22 && scale <= 22) {
    const value = scale < 0 ? mantissa / EXACT_POWERS[-scale] : mantissa * EXACT_POWERS[scale];
    return negative ? -value : value;
  }
  const value = Number(textOf(bytes, start, end));
  return Number.isFinite(value) ? value : Number.NaN;
}

const scratch = new Uint8Array(256);

/**
 * Bytes of a short ASCII text in a shared buffer, valid until the next call, without allocating.
 *
 * @returns `length` is -1 when the text is longer than 256 characters or not ASCII
 */
export function asciiBytes(text: string): { readonly bytes: Uint8Array; readonly length: number } {
  ascii.length = text.length > scratch.length ? -1 : text.length;
  for (let i = 0; i < ascii.length; i++) {
    const code = text.charCodeAt(i);
    if (code > 127) {
      ascii.length = -1;
      break;
    }
    scratch[i] = code;
  }
  return ascii;
}
const ascii = { bytes: scratch, length: 0 };

/** The same for a text. */
export function decimalOfText(text: string): number {
  const { bytes, length } = asciiBytes(text);
  return length < 0 ? Number.NaN : decimalOfBytes(bytes, 0, length);
}
