import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';

/**
 * The typefaces of the report, embedded in it: DejaVu holds every symbol a report uses (superscripts, Greek, ≤, ±, ×).
 * Read once; from the package dejavu-fonts-ttf (free licence of the Bitstream Vera family).
 */
export const FONT_FILES = {
  body: 'DejaVuSansCondensed.ttf',
  bold: 'DejaVuSansCondensed-Bold.ttf',
  italic: 'DejaVuSansCondensed-Oblique.ttf',
  mono: 'DejaVuSansMono.ttf',
} as const;

export type FontName = keyof typeof FONT_FILES;

const cache = new Map<FontName, Buffer>();

export function fontBytes(name: FontName): Buffer {
  const known = cache.get(name);
  if (known !== undefined) return known;
  const path = createRequire(import.meta.url).resolve(`dejavu-fonts-ttf/ttf/${FONT_FILES[name]}`);
  const bytes = readFileSync(path);
  cache.set(name, bytes);
  return bytes;
}
