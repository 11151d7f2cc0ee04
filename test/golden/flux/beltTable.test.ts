import { describe, expect, it } from 'vitest';
import { type BeltTable, beltModel, checkBeltTable, tableBelts } from '../../../server/flux/index.ts';

const L = [3, 4, 6, 9];
const PITCH_DEG = [2, 20, 40, 60, 75, 90];
const ENERGIES = [0.1, 0.5, 2, 10];
const COMPARISON_REL = 1e-4;

function made(value: (l: number, sine: number, energyMeV: number) => number, sigmaDex?: number[]): BeltTable {
  const table: BeltTable = {
    name: 'Invented',
    planet: 'uranus',
    source: 'Invented for a test',
    validity: 'the axes',
    species: {
      electron: {
        lShells: L,
        equatorialPitchAnglesDeg: PITCH_DEG,
        energiesMeV: ENERGIES,
        intensityPerCm2SSrMeV: L.map((l) =>
          PITCH_DEG.map((deg) => ENERGIES.map((energy) => value(l, Math.sin((deg * Math.PI) / 180), energy))),
        ),
        ...(sigmaDex === undefined ? {} : { sigmaDex }),
      },
    },
  };
  checkBeltTable(table);
  return table;
}

describe('belts from a table', () => {
  const power = tableBelts(
    't',
    made((l, sine, energy) => 1e6 * l ** -4 * energy ** -3 * sine),
  );

  it('give power laws in L and energy, and the sine of the pitch angle, between the nodes', () => {
    // Source: closed form, log-log interpolation is exact for power laws and linear interpolation for a line.
    for (const [l, energy, sine] of [
      [3, 0.1, 1],
      [5, 1, 0.5],
      [8.9, 9.9, 0.123],
      [9, 10, 0.99],
    ]) {
      const expected = 1e6 * l ** -4 * energy ** -3 * sine;
      expect(Math.abs(power.directional('electron', energy, l, sine ** 2) / expected - 1)).toBeLessThan(1e-9);
    }
  });

  it('hold nothing outside the axes', () => {
    expect(power.directional('electron', 1, 2.99, 1)).toBe(0);
    expect(power.directional('electron', 1, 9.01, 1)).toBe(0);
    expect(power.directional('electron', 0.099, 5, 1)).toBe(0);
    expect(power.directional('electron', 10.1, 5, 1)).toBe(0);
    expect(power.directional('electron', 1, 5, Math.sin(0.03) ** 2)).toBe(0);
    expect(power.directional('proton', 1, 5, 1)).toBe(0);
  });

  it.each([
    [100, 100, Number.POSITIVE_INFINITY],
    [300, 100, Number.POSITIVE_INFINITY],
    [300, 100, 900],
    [100, 100, 140],
  ])(
    'give the omnidirectional flux that the directional one integrates to: B %s, B_min %s, B_loss %s',
    (b, bMin, bLoss) => {
      // Source: J = 4π ∫ j sin α dα outside the loss cone, by the midpoint rule in α with 200 000 steps.
      const bent = tableBelts(
        't',
        made((l, sine, energy) => 1e5 * l ** -3 * energy ** (-1 - 0.2 * l) * sine ** 1.7),
      );
      const [flux] = bent.omnidirectionalInto('electron', 5, b, bMin, bLoss, Float64Array.of(1.3), new Float64Array(1));
      const steps = 200_000;
      const coneEdge = Math.asin(Math.sqrt(b / bLoss));
      const step = (Math.PI / 2 - coneEdge) / steps;
      let sum = 0;
      for (let k = 0; k < steps; k++) {
        const sine = Math.sin(coneEdge + (k + 0.5) * step);
        sum += bent.directional('electron', 1.3, 5, (bMin / b) * sine ** 2) * sine * step;
      }
      expect(Math.abs(flux / (4 * Math.PI * sum) - 1)).toBeLessThan(COMPARISON_REL);
    },
  );

  it('keep the evidence of the planet, and its spread where they bring none', () => {
    const builtIn = beltModel('uranus-belts-1');
    expect(power.region('electron', 3.5, 1)).toBe('extrapolated');
    expect(power.region('electron', 4.7, 1)).toBe('anchored');
    expect(power.spread('electron', 3.5)).toEqual(builtIn.spread('electron', 3.5));
    const own = tableBelts(
      't',
      made(() => 1, [0.9, 0.2, 0.4, 0.5]),
    );
    expect(own.sharedSigmaDex('electron')).toBe(0.2);
    expect(own.spread('electron', 3)).toEqual({ sigmaDex: 0.9, side: 'inside' });
    expect(own.spread('electron', 9)).toEqual({ sigmaDex: 0.5, side: 'outside' });
    expect(own.energySigmaDex('electron', 20)).toBe(0);
  });
});
