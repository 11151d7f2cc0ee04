import { existsSync, readdirSync, readFileSync, statSync } from 'node:fs';
import { dirname, join, relative, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';
import { describe, expect, it } from 'vitest';
import { ERROR_CODES } from '../server/errors.ts';

const ROOT = fileURLToPath(new URL('..', import.meta.url));
const SERVER = join(ROOT, 'server');

/** A room may import from the rooms named here, and from the base. */
const BASE = ['numeric', 'constants', 'time', 'frames'];
const LEFT_OF: Readonly<Record<string, readonly string[]>> = {
  numeric: [],
  constants: [],
  time: ['constants'],
  frames: ['constants', 'numeric'],
  ephemeris: [],
  trajectory: ['ephemeris'],
  field: ['ephemeris', 'trajectory'],
  flux: ['field'],
  fluence: ['trajectory', 'field', 'flux'],
  matter: [],
  transport: ['matter'],
  shielding: ['matter', 'transport'],
  dose: ['fluence', 'flux', 'shielding', 'matter', 'field'],
  margin: ['dose', 'fluence', 'flux', 'shielding', 'field', 'trajectory'],
  figures: ['margin', 'fluence'],
  report: ['figures', 'margin', 'trajectory'],
};
const PHYSICS = Object.keys(LEFT_OF);

function sources(folder: string): string[] {
  return readdirSync(folder).flatMap((name) => {
    const path = join(folder, name);
    if (statSync(path).isDirectory()) return sources(path);
    return /\.(ts|tsx)$/.test(name) ? [path] : [];
  });
}

function imports(path: string): { from: string; typeOnly: boolean }[] {
  const text = readFileSync(path, 'utf8');
  return [...text.matchAll(/^(?:import|export)(\s+type)?[^'"]*?from\s+'(\.[^']+)'/gms)].map(([, type, target]) => ({
    from: resolve(dirname(path), target),
    typeOnly: type !== undefined,
  }));
}

const roomOf = (path: string) => relative(SERVER, path).split('/')[0];

describe('architecture', () => {
  it('lets a room import only from its left', () => {
    const wrong: string[] = [];
    for (const room of PHYSICS) {
      const allowed = new Set([...LEFT_OF[room], ...(BASE.includes(room) ? [] : BASE), room]);
      for (const path of sources(join(SERVER, room))) {
        for (const { from } of imports(path)) {
          if (!from.startsWith(SERVER)) wrong.push(`${relative(ROOT, path)} → ${relative(ROOT, from)}`);
          const target = roomOf(from);
          if (!target.endsWith('.ts') && !allowed.has(target)) wrong.push(`${relative(ROOT, path)} → ${target}`);
        }
      }
    }
    expect(wrong).toEqual([]);
  });

  it('keeps clock and ambient chance out of the physics', () => {
    const wrong = PHYSICS.flatMap((room) => sources(join(SERVER, room))).filter((path) =>
      /Math\.random|Date\.now|new Date\(\)|performance\.now/.test(readFileSync(path, 'utf8')),
    );
    expect(wrong).toEqual([]);
  });

  it('lets the client import only types and figures of the server', () => {
    const wrong: string[] = [];
    for (const path of sources(join(ROOT, 'client'))) {
      for (const { from, typeOnly } of imports(path)) {
        if (from.startsWith(SERVER) && !typeOnly && roomOf(from) !== 'figures')
          wrong.push(`${relative(ROOT, path)} → ${from}`);
      }
    }
    expect(wrong).toEqual([]);
  });

  it('explains every error code and uses each', () => {
    const text = sources(SERVER)
      .filter((path) => !path.endsWith('/errors.ts'))
      .map((path) => readFileSync(path, 'utf8'))
      .join('\n');
    for (const [code, row] of Object.entries(ERROR_CODES)) {
      expect(row.help.length, code).toBeGreaterThan(40);
      expect(text.includes(`'${code}'`), `${code} is thrown somewhere`).toBe(true);
    }
  });

  it('names the source of every reference dataset', () => {
    const folder = join(ROOT, 'db/reference');
    for (const dataset of readdirSync(folder)) {
      expect(existsSync(join(folder, dataset, 'SOURCE.md')), dataset).toBe(true);
    }
  });
});
