import { describe, expect, it } from 'vitest';
import { PLANETS } from '../../../server/constants/planets.ts';
import { bytesOf, SpkKernel } from '../../../server/ephemeris/index.ts';
import * as write from '../../make/spkWriter.ts';

/**
 * Kernels written from an analytic orbit must give that orbit back between their nodes.
 * Source: closed form of two-body motion (Kepler's equation in eccentric anomaly), written here apart from the server.
 */
const GM = PLANETS.uranus.gmKm3S2;
const SEMI_MAJOR_KM = 200_000;
const ECCENTRICITY = 0.5;
const N = Math.sqrt(GM / SEMI_MAJOR_KM ** 3);

function orbit(t: number): Float64Array {
  const mean = N * t;
  let e = mean;
  for (let i = 0; i < 60; i++) e -= (e - ECCENTRICITY * Math.sin(e) - mean) / (1 - ECCENTRICITY * Math.cos(e));
  const width = Math.sqrt(1 - ECCENTRICITY ** 2);
  const rate = N / (1 - ECCENTRICITY * Math.cos(e));
  const x = SEMI_MAJOR_KM * (Math.cos(e) - ECCENTRICITY);
  const y = SEMI_MAJOR_KM * width * Math.sin(e);
  const vx = -SEMI_MAJOR_KM * Math.sin(e) * rate;
  const vy = SEMI_MAJOR_KM * width * Math.cos(e) * rate;
  // Tilted by 0.6 rad about x, so that no component vanishes.
  return Float64Array.of(x, y * Math.cos(0.6), y * Math.sin(0.6), vx, vy * Math.cos(0.6), vy * Math.sin(0.6));
}

function acceleration(state: ArrayLike<number>): number[] {
  const r = Math.hypot(state[0], state[1], state[2]);
  return [0, 1, 2].map((i) => (-GM * state[i]) / r ** 3);
}

const START = -40_000;
const STEP = 300;
const COUNT = 281;
const STOP = START + STEP * (COUNT - 1);
const even = Array.from({ length: COUNT }, (_, i) => START + STEP * i);
/** Spacing that varies by half, as mission-design exports have it. */
const uneven = even.map((t, i) => (i === 0 || i === COUNT - 1 ? t : t + 0.25 * STEP * Math.sin(1.7 * i)));

/**
 * 1 mm and 1 µm/s: below what any kernel prints. The truncation of these windows is far smaller: with steps of 0.02 of
 * the time scale of the orbit, sqrt(r³/GM) = 13 000 s at periapsis, degree 7 leaves about 0.02⁸ × 100 000 km = 3e-9 km.
 */
const POSITION_TOLERANCE_KM = 1e-6;
const VELOCITY_TOLERANCE_KM_S = 1e-9;

const CASES: readonly { name: string; type: number; words: number[] }[] = [
  {
    name: 'Lagrange, equal steps',
    type: 8,
    words: write.equalStates(orbit, START, STEP, COUNT, 9),
  },
  {
    name: 'Lagrange, even window',
    type: 8,
    words: write.equalStates(orbit, START, STEP, COUNT, 8),
  },
  {
    name: 'Lagrange, unequal steps',
    type: 9,
    words: write.unequalStates(orbit, uneven, 9),
  },
  {
    name: 'Hermite, equal steps',
    type: 12,
    words: write.equalStates(orbit, START, STEP, COUNT, 4),
  },
  {
    name: 'Hermite, unequal steps',
    type: 13,
    words: write.unequalStates(orbit, uneven, 3),
  },
  {
    name: 'Hermite of position and of velocity',
    type: 18,
    words: write.packets(orbit, acceleration, uneven, 0, 6),
  },
  {
    name: 'Lagrange, six-word packets',
    type: 18,
    words: write.packets(orbit, acceleration, uneven, 1, 10),
  },
  {
    name: 'two-body blend',
    type: 5,
    words: write.twoBodyStates(orbit, uneven, GM),
  },
  {
    name: 'Chebyshev of position',
    type: 2,
    words: write.chebyshev(orbit, 2, START, 2 * STEP, (COUNT / 2) | 0, 12),
  },
  {
    name: 'Chebyshev of position and velocity',
    type: 3,
    words: write.chebyshev(orbit, 3, START, 2 * STEP, (COUNT / 2) | 0, 12),
  },
];

describe('kernels written from an analytic orbit', () => {
  for (const littleEndian of [true, false]) {
    for (const { name, type, words } of CASES) {
      it(`type ${type}, ${name}, ${littleEndian ? 'little' : 'big'}-endian`, () => {
        const kernel = new SpkKernel(
          bytesOf(
            write.writeSpk({
              littleEndian,
              segments: [{ target: -77, center: 799, type, startTdbS: START, stopTdbS: STOP, words }],
            }),
          ),
        );
        const out = new Float64Array(6);
        let worstKm = 0;
        let worstKmS = 0;
        for (let i = 0; i <= 2000; i++) {
          const t = START + ((STOP - START) * i) / 2000;
          expect(kernel.stateInto(-77, 799, t, out)).toBe(true);
          const expected = orbit(t);
          worstKm = Math.max(worstKm, Math.hypot(out[0] - expected[0], out[1] - expected[1], out[2] - expected[2]));
          worstKmS = Math.max(worstKmS, Math.hypot(out[3] - expected[3], out[4] - expected[4], out[5] - expected[5]));
        }
        expect(worstKm, 'position, km').toBeLessThan(POSITION_TOLERANCE_KM);
        expect(worstKmS, 'velocity, km/s').toBeLessThan(VELOCITY_TOLERANCE_KM_S);
      });
    }
  }
});
