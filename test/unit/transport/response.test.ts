import { describe, expect, it } from 'vitest';
import { aluminiumDoseDepth } from '../../../server/dose/aluminium.ts';
import { electronCollisionStopping, material } from '../../../server/matter/index.ts';
import { ELECTRON_EDGES_MEV } from '../../../server/numeric/spectrumGrid.ts';
import {
  finishResponse,
  planRound,
  type ResponseOptions,
  responseKey,
  runShard,
  shieldResponse,
} from '../../../server/shielding/response.ts';
import { aimAtCentre } from '../../../server/shielding/responsePlan.ts';
import type { StackInput } from '../../../server/shielding/types.ts';
import { GY_PER_MEV_PER_G } from '../../../server/units.ts';

const OPTIONS: ResponseOptions = { effort: 'standard', targetMaterialId: 'Si', seed: 1 };
const thin = (geometry: 'slab' | 'sphere'): StackInput => ({
  geometry,
  layers: [{ materialId: 'Al', thicknessMm: 1e-4 }],
});
const BIN = ELECTRON_EDGES_MEV.findIndex((edge) => edge > 20);
const SIGMAS = 4;

function someBins(stack: StackInput, bins: readonly number[], histories: number) {
  const [task] = planRound(stack, OPTIONS, []);
  const tally = runShard({ ...task, pieces: bins.map((bin) => ({ bin, stream: 0, histories })) });
  return finishResponse(stack, OPTIONS, [tally]);
}

describe('response of a shield', () => {
  it.each([
    ['slab', 0.5],
    ['sphere', 1],
  ] as const)('nears its transparent limit in a %s', (geometry, share) => {
    // Source: closed form, S/2 and S per unit 4π-integrated fluence. Secondary electrons carry energy out of a bare thin
    // target and nothing brings it back: the dose lies between the stopping power restricted to about 50 keV (range about
    // the target's thickness, 0.75 of the whole) and the whole one.
    const { electron } = someBins(thin(geometry), [BIN], 6000);
    const energy = Math.sqrt(ELECTRON_EDGES_MEV[BIN] * ELECTRON_EDGES_MEV[BIN + 1]);
    const limit = share * electronCollisionStopping(material('Si'), energy) * GY_PER_MEV_PER_G;
    const slack = SIGMAS * electron.doseSigmaGyCm2[BIN];
    expect(electron.doseGyCm2[BIN]).toBeLessThan(limit + slack);
    expect(electron.doseGyCm2[BIN]).toBeGreaterThan(0.75 * limit - slack);
    expect(Math.abs(electron.transmitted[BIN] - 0.25)).toBeLessThan(SIGMAS * electron.transmittedSigma[BIN] + 0.01);
  });

  it('does not depend on the order or grouping of its shards', () => {
    const stack: StackInput = { geometry: 'slab', layers: [{ materialId: 'Al', thicknessMm: 0.5 }] };
    const [task] = planRound(stack, OPTIONS, []);
    const piece = (bin: number, stream: number) => ({ bin, stream, histories: 100 });
    const run = (pieces: readonly ReturnType<typeof piece>[]) => runShard({ ...task, pieces });
    const together = finishResponse(stack, OPTIONS, [run([piece(40, 0), piece(40, 1), piece(50, 0), piece(60, 0)])]);
    const apart = finishResponse(stack, OPTIONS, [
      run([piece(60, 0)]),
      run([piece(40, 1)]),
      run([piece(50, 0)]),
      run([piece(40, 0)]),
    ]);
    expect(apart).toEqual(together);
  });

  it('begins with every bin once, and adds histories only where the reference spectra ask for them', () => {
    const stack: StackInput = { geometry: 'slab', layers: [{ materialId: 'Al', thicknessMm: 0.5 }] };
    const first = planRound(stack, OPTIONS, []);
    const bins = first.flatMap((task) => task.pieces.map((piece) => piece.bin));
    expect(bins.sort((a, b) => a - b)).toEqual(Array.from({ length: 90 }, (_, i) => i));
    const tallies = first.map(runShard);
    const second = planRound(stack, OPTIONS, tallies).flatMap((task) => task.pieces);
    const added = (from: number, to: number) =>
      second.filter(({ bin }) => bin >= from && bin < to).reduce((sum, piece) => sum + piece.histories, 0);
    // Electrons of 0.5 to 1 MeV just come through 0.5 mm of aluminium; those above 50 MeV are in no belt.
    expect(added(33, 42)).toBeGreaterThan(10 * added(82, 90));
    expect(second.every((piece) => piece.stream > 0)).toBe(true);
  });

  it('reaches 2 % on every reference spectrum and says so', () => {
    const stack: StackInput = { geometry: 'slab', layers: [{ materialId: 'Al', thicknessMm: 0.2 }] };
    const { referenceErrorRel, notices } = shieldResponse(stack, OPTIONS);
    expect(referenceErrorRel).toBeLessThan(0.022);
    expect(referenceErrorRel).toBeGreaterThan(0.002);
    expect(notices.join(' ')).not.toContain('statistical error');
  });

  it('has one address per content', () => {
    const mm: StackInput = { geometry: 'slab', layers: [{ materialId: 'Al', thicknessMm: 2.54 }] };
    const mil: StackInput = { geometry: 'slab', layers: [{ materialId: 'Al', thicknessMil: 100 }] };
    expect(responseKey(mil, OPTIONS)).toBe(responseKey(mm, OPTIONS));
    expect(responseKey(mm, { ...OPTIONS, seed: 2 })).not.toBe(responseKey(mm, OPTIONS));
    expect(responseKey({ ...mm, backing: 'same' }, OPTIONS)).not.toBe(responseKey(mm, OPTIONS));
  });

  it('gives a ball in a wide thin shell what it gets in its own thin skin', () => {
    // Source: closed form, the transparent limit S per unit 4π-integrated fluence, for any inner radius.
    const wall = { materialId: 'Al', thicknessMm: 0.01 };
    const bins = [58];
    const shell = someBins({ geometry: 'shell', innerRadiusMm: 20, layers: [wall] }, bins, 12_000).electron;
    const sphere = someBins({ geometry: 'sphere', layers: [wall] }, bins, 12_000).electron;
    const sigma = Math.hypot(shell.doseSigmaGyCm2[58], sphere.doseSigmaGyCm2[58]);
    // Both near the transparent limit; the solid sphere's skin returns some of the electrons that leave the ball (2 %).
    expect(Math.abs(shell.doseGyCm2[58] - sphere.doseGyCm2[58])).toBeLessThan(
      SIGMAS * sigma + 0.05 * sphere.doseGyCm2[58],
    );
  });

  it('aims at the centre without changing any mean', () => {
    // Source: closed form of the cosine law, mean of sin² = 1/2 and of cos = 2/3; midpoint rule over both deviates.
    const out = new Float64Array(2);
    let weight = 0;
    let sine2 = 0;
    let cosine = 0;
    const n = 1000;
    for (let i = 0; i < n; i++) {
      for (let j = 0; j < n; j++) {
        aimAtCentre(0.01, 0.8, (i + 0.5) / n, (j + 0.5) / n, out);
        weight += out[1] / n ** 2;
        sine2 += (out[1] * (1 - out[0] ** 2)) / n ** 2;
        cosine += (out[1] * out[0]) / n ** 2;
      }
    }
    expect(weight).toBeCloseTo(1, 4);
    expect(sine2).toBeCloseTo(0.5, 4);
    expect(cosine).toBeCloseTo(2 / 3, 4);
  });
});

describe('aluminium dose-depth table', () => {
  it('agrees with responses run anew, and falls with depth', () => {
    const { depthsMm, responses } = aluminiumDoseDepth();
    const at = depthsMm.findIndex((depth) => depth > 0.5);
    const stack: StackInput = { geometry: 'slab', layers: [{ materialId: 'Al', thicknessMm: depthsMm[at] }] };
    const bins = [47, 50, 53];
    const { electron, proton } = someBins(stack, bins, 1500);
    for (const bin of bins) {
      const stored = responses[at].electron;
      const sigma = Math.hypot(stored.doseSigmaGyCm2[bin], electron.doseSigmaGyCm2[bin]);
      expect(Math.abs(stored.doseGyCm2[bin] - electron.doseGyCm2[bin])).toBeLessThan(SIGMAS * sigma);
    }
    // Stored to four digits.
    responses[at].proton.doseGyCm2.forEach((dose, bin) => {
      expect(Math.abs(dose - proton.doseGyCm2[bin])).toBeLessThanOrEqual(6e-4 * proton.doseGyCm2[bin]);
    });
    for (let i = 1; i < depthsMm.length; i++) {
      expect(depthsMm[i]).toBeGreaterThan(depthsMm[i - 1]);
      const sum = (k: number) => responses[k].proton.doseGyCm2.reduce((total, dose) => total + dose, 0);
      expect(sum(i)).toBeLessThan(sum(i - 1));
    }
  });
});
