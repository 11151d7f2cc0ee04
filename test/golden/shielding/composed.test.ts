import { describe, expect, it } from 'vitest';
import { aluminiumDoseDepth } from '../../../server/dose/aluminium.ts';
import { ELECTRON_EDGES_MEV, PROTON_EDGES_MEV } from '../../../server/numeric/spectrumGrid.ts';
import { composeShield, stacksOf } from '../../../server/shielding/composeShield.ts';
import { normaliseStack } from '../../../server/shielding/stack.ts';
import type { LayerInput, ShieldInput, ShieldResponse, StackInput } from '../../../server/shielding/types.ts';
import { toyResponse } from '../../unit/margin/toy.ts';

const OPTIONS = { effort: 'standard', targetMaterialId: 'Si', seed: 1 } as const;
const al = (thicknessMm: number): LayerInput[] => [{ materialId: 'Al', thicknessMm }];
const sphere = (thicknessMm: number): StackInput => ({ geometry: 'sphere', layers: al(thicknessMm) });

/** A response whose dose falls as a power of the thickness: the interpolation in logarithms is exact for it. */
const POWER = 2.5;
function powerLaw(stack: StackInput): ShieldResponse {
  const thicknessMm = normaliseStack(stack).layers.reduce((sum, layer) => sum + layer.thicknessMm, 0);
  const dose = 433.5 * thicknessMm ** -POWER;
  return toyResponse({ name: `t ${thicknessMm}`, electron: () => dose, proton: () => dose, sigmaRel: 0.01 });
}
const composed = (shield: ShieldInput, of: (stack: StackInput) => ShieldResponse = powerLaw) =>
  composeShield(shield, OPTIONS, stacksOf(shield).map(of));
const walls = (layers: LayerInput[]) => Array.from({ length: 6 }, () => layers);

describe('shields put together from responses', () => {
  it('average the dose, never the thickness: the toy sector case', () => {
    // Source: the worked sector case of common practice: 10 % at 1 mm and 90 % at 8 mm give 45.5 where their mean thickness,
    // 7.3 mm, gives 3.0, on a toy curve t^-2.5 scaled to it.
    const shield: ShieldInput = {
      kind: 'sectors',
      sectors: [
        { fraction: 0.1, stack: sphere(1) },
        { fraction: 0.9, stack: sphere(8) },
      ],
    };
    expect(composed(shield).electron.doseGyCm2[40]).toBeCloseTo(45.5, 1);
    expect(powerLaw(sphere(7.3)).electron.doseGyCm2[40]).toBeCloseTo(3.0, 1);
  });

  it('give a cube about its centre the mean of cos^2.5 θ times the dose behind its wall', () => {
    // Source: closed form by quadrature over one face, ∬ (1 + x² + y²)^(-3/2 - 2.5/2) dx dy, six faces over 4π.
    const n = 400;
    let integral = 0;
    for (let i = 0; i < n; i++) {
      for (let j = 0; j < n; j++) {
        const [x, y] = [(2 * (i + 0.5)) / n - 1, (2 * (j + 0.5)) / n - 1];
        integral += (1 + x * x + y * y) ** (-1.5 - POWER / 2) * (2 / n) ** 2;
      }
    }
    const shield: ShieldInput = {
      kind: 'box',
      box: { innerSizeMm: [200, 200, 200], positionMm: [0, 0, 0], walls: walls(al(3)) },
    };
    const behindWall = 433.5 * 3 ** -POWER;
    const { electron, proton } = composed(shield);
    const expected = ((6 * integral) / (4 * Math.PI)) * behindWall;
    expect(Math.abs(electron.doseGyCm2[30] / expected - 1)).toBeLessThan(2e-3);
    expect(Math.abs(proton.doseGyCm2[30] / expected - 1)).toBeLessThan(2e-3);
    // Two responses share nearly all of the mean: their errors do not average away.
    expect(electron.doseSigmaGyCm2[30] / electron.doseGyCm2[30]).toBeGreaterThan(0.005);
    expect(electron.doseSigmaGyCm2[30] / electron.doseGyCm2[30]).toBeLessThan(0.01);
  });

  it('interpolate between scaled stacks of several materials exactly for a power law', () => {
    // Source: closed form: a wall met at sec θ has the dose of the wall times cos^2.5 θ, whatever it is made of.
    const layers = [...al(1), { materialId: 'Ta', thicknessMm: 0.5 }];
    const box = (of: LayerInput[]): ShieldInput => ({
      kind: 'box',
      box: { innerSizeMm: [120, 200, 300], positionMm: [10, -20, 30], walls: walls(of) },
    });
    const mixed = composed(box(layers)).electron.doseGyCm2[20];
    const plain = composed(box(al(1.5))).electron.doseGyCm2[20];
    expect(Math.abs(mixed / plain - 1)).toBeLessThan(1e-3);
  });

  it('take a spot shield over all of the part as further layers, over some of it as a share', () => {
    // Source: closed form, t = 2 + 1 mm where it covers.
    const stack = sphere(2);
    const at = (thicknessMm: number) => 433.5 * thicknessMm ** -POWER;
    const spot = { layers: al(1) };
    expect(composed({ kind: 'stack', stack, spot }).electron.doseGyCm2[5]).toBeCloseTo(at(3), 6);
    const part = composed({ kind: 'stack', stack, spot: { ...spot, coveredFraction: 0.4 } }).electron.doseGyCm2[5];
    expect(part).toBeCloseTo(0.4 * at(3) + 0.6 * at(2), 6);
  });

  it('read aluminium between two depths of its table as a response run for that depth, to 2 %', () => {
    // Source: the same transport at a depth that is no node: each fourth node left out and read from its neighbours, so that
    // the step is twice that of the table.
    const { depthsMm, responses } = aluminiumDoseDepth('sphere');
    const spectrum = Array.from({ length: ELECTRON_EDGES_MEV.length - 1 }, (_, bin) => ELECTRON_EDGES_MEV[bin] ** -2);
    const dose = ({ electron }: ShieldResponse) =>
      spectrum.reduce(
        (sum, weight, bin) => sum + weight * (electron.doseGyCm2[bin] + electron.bremsstrahlungGyCm2[bin]),
        0,
      );
    const protons = ({ proton }: ShieldResponse) =>
      proton.doseGyCm2.reduce((sum, value, bin) => sum + value * PROTON_EDGES_MEV[bin] ** -2, 0);
    for (let i = 9; i < depthsMm.length - 1; i += 4) {
      for (const of of [dose, protons]) {
        const between = Math.sqrt(of(responses[i - 1]) * of(responses[i + 1]));
        // A step twice as long has four times the error of one in use: 2 % there are 8 % here, statistics of 2 % each included.
        expect(Math.abs(between / of(responses[i]) - 1), `${depthsMm[i]} mm`).toBeLessThan(0.08);
      }
    }
  });
});
