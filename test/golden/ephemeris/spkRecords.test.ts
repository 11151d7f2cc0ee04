import { existsSync, readdirSync, readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { bytesOf, SpkKernel } from '../../../server/ephemeris/index.ts';
import { chebyshev, differenceRecords, writeSpk } from '../../make/spkWriter.ts';

interface PrintedState {
  readonly epochTdbS: number;
  readonly positionKm: readonly number[];
  readonly velocityKmS: readonly number[];
}
interface Encounter {
  readonly spacecraft: {
    readonly target: number;
    readonly center: number;
    readonly records: readonly { epochTdbS: number; words: readonly number[] }[];
    readonly state: PrintedState;
  };
  readonly planet: Chebyshev;
}
interface Chebyshev {
  readonly target: number;
  readonly center: number;
  readonly type: number;
  readonly record: { readonly intervalS: number; readonly words: readonly number[] };
  readonly state: PrintedState;
}
// Source: fixtures/golden/encounters/README.md, raw records of NAIF kernels and the states an independent reader gives.
const records: { uranus: Encounter; neptune: Encounter; satellite: Chebyshev } = JSON.parse(
  readFileSync(new URL('../../../fixtures/golden/encounters/kernel-records.json', import.meta.url), 'utf8'),
);

/** Half a printed digit and the spacing of doubles at 4e5 km, the largest coordinate. */
const POSITION_TOLERANCE_KM = 0.5e-6 + 6e-11;
/** Half a printed digit. */
const VELOCITY_TOLERANCE_KM_S = 0.5e-10 + 4e-15;

function expectState(out: Float64Array, printed: PrintedState, toleranceKm = POSITION_TOLERANCE_KM): void {
  for (let i = 0; i < 3; i++) {
    expect(Math.abs(out[i] - printed.positionKm[i]), `position ${i}, km`).toBeLessThanOrEqual(toleranceKm);
    expect(Math.abs(out[3 + i] - printed.velocityKmS[i]), `velocity ${i}, km/s`).toBeLessThanOrEqual(
      VELOCITY_TOLERANCE_KM_S,
    );
  }
}

describe('records of real kernels', () => {
  for (const planet of ['uranus', 'neptune'] as const) {
    for (const [dimension, type] of [
      [15, 1],
      [15 + 5, 21],
    ] as const) {
      for (const littleEndian of [true, false]) {
        it(`${planet}: difference arrays as type ${type}, ${littleEndian ? 'little' : 'big'}-endian`, () => {
          const { spacecraft } = records[planet];
          const epochs = spacecraft.records.map(({ epochTdbS }) => epochTdbS);
          const kernel = new SpkKernel(
            bytesOf(
              writeSpk({
                littleEndian,
                segments: [
                  {
                    target: spacecraft.target,
                    center: spacecraft.center,
                    type,
                    startTdbS: epochs[0],
                    stopTdbS: epochs[epochs.length - 1],
                    words: differenceRecords(spacecraft.records, dimension),
                  },
                ],
              }),
            ),
          );
          const out = new Float64Array(6);
          expect(kernel.stateInto(spacecraft.target, spacecraft.center, spacecraft.state.epochTdbS, out)).toBe(true);
          expectState(out, spacecraft.state);
        });
      }
    }

    it(`${planet}: neighbouring records meet at their common epoch`, () => {
      const { spacecraft } = records[planet];
      const [a, b, c] = spacecraft.records;
      const state = (kept: typeof spacecraft.records): Float64Array => {
        const kernel = new SpkKernel(
          bytesOf(
            writeSpk({
              segments: [
                {
                  target: -32,
                  center: 7,
                  type: 1,
                  startTdbS: a.epochTdbS,
                  stopTdbS: c.epochTdbS,
                  words: differenceRecords(kept, 15),
                },
              ],
            }),
          ),
        );
        const out = new Float64Array(6);
        kernel.stateInto(-32, 7, b.epochTdbS, out);
        return out;
      };
      // Source: the kernels themselves; their records jump by less than 1.5 km and 8e-4 km/s where they meet.
      const left = state([a, b]);
      const right = state([c]);
      expect(Math.hypot(left[0] - right[0], left[1] - right[1], left[2] - right[2])).toBeLessThan(1.5);
      expect(Math.hypot(left[3] - right[3], left[4] - right[4], left[5] - right[5])).toBeLessThan(8e-4);
    });
  }

  for (const [name, body] of [
    ['Uranus about its barycentre', records.uranus.planet],
    ['Neptune about its barycentre', records.neptune.planet],
    ['a satellite about a barycentre', records.satellite],
  ] as const) {
    it(`${name}: Chebyshev polynomials of type ${body.type}`, () => {
      const { words, intervalS } = body.record;
      const first = words[0] - words[1];
      const kernel = new SpkKernel(
        bytesOf(
          writeSpk({
            segments: [
              {
                target: body.target,
                center: body.center,
                type: body.type,
                startTdbS: first,
                stopTdbS: first + intervalS,
                words: [...words, first, intervalS, words.length, 1],
              },
            ],
          }),
        ),
      );
      const out = new Float64Array(6);
      expect(kernel.stateInto(body.target, body.center, body.state.epochTdbS, out)).toBe(true);
      expectState(out, body.state);
    });
  }

  it('agrees with a polynomial whose Chebyshev form is known', () => {
    // Source: closed form, x = T₃(s) = 4s³ − 3s, dx/dt = (12 s² − 3) / radius (Abramowitz & Stegun 22.3.6).
    const radius = 500;
    const orbit = (t: number): number[] => {
      const s = (t - 1000) / radius;
      return [4 * s ** 3 - 3 * s, s, 1, (12 * s * s - 3) / radius, 1 / radius, 0];
    };
    for (const type of [2, 3] as const) {
      const words = chebyshev(orbit, type, 500, 1000, 1, 5);
      const kernel = new SpkKernel(
        bytesOf(writeSpk({ segments: [{ target: -9, center: 7, type, startTdbS: 500, stopTdbS: 1500, words }] })),
      );
      const out = new Float64Array(6);
      for (const t of [500, 700, 1000, 1234.5, 1500]) {
        kernel.stateInto(-9, 7, t, out);
        orbit(t).forEach((value, i) => {
          expect(out[i]).toBeCloseTo(value, 12);
        });
      }
    }
  });
});

const REFERENCE = process.env.SIDELONG_REFERENCE;
const SAMPLES = REFERENCE === undefined ? '' : `${REFERENCE}/ephemeris`;
const available = REFERENCE !== undefined && existsSync(`${SAMPLES}/golden-states.json`);

describe.skipIf(!available)('whole kernels (set SIDELONG_REFERENCE to a directory that holds them)', () => {
  it('gives the printed state of every kernel that is there', () => {
    const golden: {
      states: { file: string; target: number; center: number; et: number; pos_km: number[]; vel_km_s: number[] }[];
    } = JSON.parse(readFileSync(`${SAMPLES}/golden-states.json`, 'utf8'));
    const aliases: Record<string, string> = {
      'vgr2.ura182.bsp': 'vgr2_uranus_ca_pm1d.bsp',
      'vgr2_nep097.bsp': 'vgr2_neptune_ca_pm1d.bsp',
    };
    const files = new Set(readdirSync(`${SAMPLES}/samples`));
    let checked = 0;
    for (const state of golden.states) {
      const file = files.has(state.file) ? state.file : aliases[state.file];
      if (file === undefined || !files.has(file)) continue;
      const kernel = new SpkKernel(bytesOf(readFileSync(`${SAMPLES}/samples/${file}`)));
      const out = new Float64Array(6);
      // A cut covers only part of the whole kernel; what it does not cover is no failure.
      if (!kernel.stateInto(state.target, state.center, state.et, out)) continue;
      // Coordinates up to 3e9 km have a spacing of 5e-7.
      const spacing = Math.max(...state.pos_km.map(Math.abs)) * 2.3e-16;
      expectState(
        out,
        { epochTdbS: state.et, positionKm: state.pos_km, velocityKmS: state.vel_km_s },
        0.5e-6 + spacing,
      );
      checked++;
    }
    expect(checked).toBeGreaterThanOrEqual(7);
  });
});
