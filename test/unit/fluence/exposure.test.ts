import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { bytesOf } from '../../../server/ephemeris/index.ts';
import {
  computeExposure,
  type EnvironmentChoice,
  integralFluence,
  variantEdges,
} from '../../../server/fluence/index.ts';
import { ELECTRON_EDGES_MEV } from '../../../server/numeric/spectrumGrid.ts';
import { type Path, readTrajectory } from '../../../server/trajectory/index.ts';

const ENVIRONMENT: EnvironmentChoice = {
  fieldModelId: 'uranus-q3',
  rotationModelId: 'uranus-2025',
  beltModelId: 'uranus-belts-1',
  phase: { mode: 'published' },
  sampledFieldModelIds: [],
};
/** Halving the step may change no fluence by more than this. */
const REFINEMENT_REL = 0.005;

function encounter(): Path {
  const url = new URL('../../../fixtures/golden/encounters/uranus-1986.oem', import.meta.url);
  return readTrajectory(bytesOf(readFileSync(url))).path;
}

function spectrum(path: Path, tolerance?: number): Float64Array {
  const { artefact } = computeExposure(path, ENVIRONMENT, tolerance === undefined ? {} : { tolerance });
  const edges = variantEdges(artefact, 0, 'electron');
  return ELECTRON_EDGES_MEV.map((energy) => integralFluence('electron', edges, energy));
}

describe('exposure', () => {
  const path = encounter();
  const whole = spectrum(path);

  it('is conserved when the step is made finer', () => {
    const finer = spectrum(path, 1e-5);
    for (let i = 0; i < whole.length; i++) {
      if (finer[i] > 1) expect(Math.abs(whole[i] / finer[i] - 1)).toBeLessThan(REFINEMENT_REL);
    }
  });

  it('is conserved when the path is split in two', () => {
    const [span] = path.spans;
    const middle = 0.5 * (span.startTdbS + span.stopTdbS) + 777;
    const half = (startTdbS: number, stopTdbS: number): Path => ({
      planet: path.planet,
      inputsSha256: `${path.inputsSha256}${startTdbS}`,
      spans: [{ startTdbS, stopTdbS }],
      stateInto: (t, out) => path.stateInto(t, out),
    });
    const first = spectrum(half(span.startTdbS, middle));
    const second = spectrum(half(middle, span.stopTdbS));
    for (let i = 0; i < whole.length; i++) {
      if (whole[i] > 1) expect(Math.abs((first[i] + second[i]) / whole[i] - 1)).toBeLessThan(REFINEMENT_REL);
    }
  });

  it('refuses what it cannot follow, naming the field', () => {
    expect(() => computeExposure(path, { ...ENVIRONMENT, rotationModelId: 'neptune-2009' })).toThrow(/neptune/);
    expect(() => computeExposure(path, { ...ENVIRONMENT, phase: { mode: 'sweep', count: 1 } })).toThrow(/count/);
    expect(() => computeExposure(path, { ...ENVIRONMENT, phase: { mode: 'offset' } })).toThrow(/offsetDeg/);
    expect(() => computeExposure(path, { ...ENVIRONMENT, beltModelId: 'x' })).toThrow(/not known/);
  });

  it('finds a worst phase at least as high as every node of a sweep', () => {
    const { summary } = computeExposure(path, { ...ENVIRONMENT, phase: { mode: 'sweep', count: 12 } });
    const nodes = summary.byPhase.filter((entry) => !entry.refined).map((entry) => entry.electronPerCm2[2]);
    expect(summary.worstPhase.electronAbove1MeVPerCm2).toBeGreaterThanOrEqual(Math.max(...nodes));
    expect(summary.byPhase.some((entry) => entry.refined)).toBe(true);
  });
});
