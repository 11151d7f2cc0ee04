import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { bytesOf } from '../../../server/ephemeris/index.ts';
import { AppError } from '../../../server/errors.ts';
import { readTrajectory } from '../../../server/trajectory/index.ts';

const FOLDER = new URL('../../../fixtures/malformed/', import.meta.url);
const expected: Record<string, { code: string; line?: number }> = JSON.parse(
  readFileSync(new URL('expected.json', FOLDER), 'utf8'),
);

/** Code and line of the refusal; code '' when the file reads. */
function outcome(file: string): { code: string; line?: number; message: string } {
  try {
    readTrajectory(bytesOf(readFileSync(new URL(file, FOLDER))));
    return { code: '', message: '' };
  } catch (cause) {
    if (!(cause instanceof AppError)) throw cause;
    const line = cause.places[0]?.line;
    return { code: cause.code, message: cause.message, ...(line === undefined ? {} : { line }) };
  }
}

describe('malformed files', () => {
  it.each(Object.entries(expected))('%s', (file, refusal) => {
    const { message, ...got } = outcome(file);
    if (refusal.line === undefined) {
      expect(got.code).toBe(refusal.code);
    } else {
      expect(got).toEqual(refusal);
      expect(message).toContain(`ine ${refusal.line}`);
    }
  });
});
