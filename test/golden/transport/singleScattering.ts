import { readFileSync } from 'node:fs';
import { expect } from 'vitest';
import { type BeamCase, runBeam } from '../../../server/transport/beam.ts';

/** Source: fixtures/golden/transport/README.md, an event-by-event calculation that shares no step scheme with ours. */
export interface Golden {
  readonly materialId: string;
  readonly energyMeV: number;
  readonly incidence: 'normal' | 'cosine';
  readonly slabGPerCm2: number | null;
  readonly histories: number;
  readonly numberBackscatter: number;
  readonly energyBackscatter: number;
  readonly numberTransmission: number;
  readonly depthGPerCm2: readonly number[];
  readonly doseMeVCm2PerG: readonly number[];
  readonly doseSigma: readonly number[];
}

const CASES = JSON.parse(
  readFileSync(new URL('../../../fixtures/golden/transport/single-scattering.json', import.meta.url), 'utf8'),
) as Golden[];

export const NAMED = CASES.map(
  (golden) =>
    [
      `${golden.materialId} ${golden.energyMeV} MeV ${golden.incidence} ${golden.slabGPerCm2 ?? 'thick'}`,
      golden,
    ] as const,
);

export const isHeavy = ({ materialId }: Golden) => ['Ta', 'Au'].includes(materialId);

/** Rms difference of the bins above half the peak beyond both statistical errors: model of light and heavy elements. */
const DOSE_RMS = { light: 0.03, heavy: 0.05 };
/** Depths where the dose falls to a share of the peak. */
const DEPTH_TOLERANCE = { light: 0.02, heavy: 0.035 };
/** Number backscatter: 0.01 absolute for light elements, 5 % for others, and three standard errors of both runs. */
const BACKSCATTER_ABSOLUTE = 0.01;
const BACKSCATTER_SHARE = 0.05;
const TRANSMISSION_ABSOLUTE = 0.02;

/** Runs a case and holds it to the targets; `shares` of the peak whose depths are compared. */
export function checkCase(golden: Golden, histories: number, seed: number, shares: readonly number[]): void {
  const kind = isHeavy(golden) ? 'heavy' : 'light';
  const width = 2 * golden.depthGPerCm2[0];
  const bins = golden.depthGPerCm2.length;
  const input: BeamCase = {
    particle: 'electron',
    energyMeV: golden.energyMeV,
    incidence: golden.incidence === 'cosine' ? 'cosine' : { angleDeg: 0 },
    layers: [{ materialId: golden.materialId, thicknessGPerCm2: golden.slabGPerCm2 ?? 2 * bins * width }],
    bins: golden.slabGPerCm2 === null ? 2 * bins : bins,
    histories,
    seed,
    photons: false,
  };
  const ours = runBeam(input, () => performance.now());
  const peak = Math.max(...golden.doseMeVCm2PerG);
  let excess = 0;
  let count = 0;
  golden.doseMeVCm2PerG.forEach((dose, b) => {
    if (dose < peak / 2) return;
    const noise = ours.doseSigma[b] ** 2 + golden.doseSigma[b] ** 2;
    excess += ((ours.doseMeVCm2PerG[b] - dose) ** 2 - noise) / dose ** 2;
    count += 1;
  });
  expect(Math.sqrt(Math.max(0, excess / count)), 'rms of the dose').toBeLessThan(DOSE_RMS[kind]);
  const both = (share: number) => 3 * Math.sqrt(share * (1 - share) * (1 / histories + 1 / golden.histories));
  const light = ['Al', 'C', 'Si'].includes(golden.materialId);
  const allowed = light ? BACKSCATTER_ABSOLUTE : BACKSCATTER_SHARE * golden.numberBackscatter;
  expect(Math.abs(ours.numberBackscatter - golden.numberBackscatter), 'backscatter').toBeLessThan(
    allowed + both(golden.numberBackscatter),
  );
  expect(Math.abs(ours.numberTransmission - golden.numberTransmission), 'transmission').toBeLessThan(
    TRANSMISSION_ABSOLUTE + both(golden.numberTransmission),
  );
  if (golden.slabGPerCm2 !== null) return;
  const plateau = golden.doseMeVCm2PerG.flatMap((dose, b) => (dose > 0.95 * peak ? [b] : []));
  for (const share of shares) {
    const ratio =
      fallsTo(ours.doseMeVCm2PerG, plateau, share, width) / fallsTo(golden.doseMeVCm2PerG, plateau, share, width);
    expect(Math.abs(ratio - 1), `depth of ${share} of the peak`).toBeLessThan(DEPTH_TOLERANCE[kind]);
  }
}

/** Depth at which a dose falls to a share of its mean over the bins of the peak. */
function fallsTo(dose: readonly number[], plateau: readonly number[], share: number, width: number): number {
  const level = (share * plateau.reduce((sum, bin) => sum + dose[bin], 0)) / plateau.length;
  let b = plateau[plateau.length - 1];
  while (dose[b + 1] >= level) b += 1;
  return width * (b + 0.5 + (dose[b] - level) / (dose[b] - dose[b + 1]));
}
