/** Source: direct tracing of every point, which test/golden/field holds to an independent calculation. */
import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { bytesOf } from '../../../server/ephemeris/index.ts';
import {
  fieldLabeller,
  fieldModel,
  type MagneticLabeller,
  makeLabel,
  tracedLabeller,
} from '../../../server/field/index.ts';
import {
  computeExposure,
  type EnvironmentChoice,
  type Exposure,
  integralFluence,
  variantEdges,
} from '../../../server/fluence/index.ts';
import { bodyAxesInto, ROTATION_MODELS, rotateInto } from '../../../server/frames/rotation.ts';
import { ELECTRON_EDGES_MEV, PROTON_EDGES_MEV } from '../../../server/numeric/spectrumGrid.ts';
import { type Path, readTrajectory } from '../../../server/trajectory/index.ts';

const FLYBYS = [
  'golden/encounters/uranus-1986',
  'golden/encounters/neptune-1989',
  'demo/uranus-flyby-low',
  'demo/uranus-flyby-middle',
  'demo/uranus-flyby-high',
  'demo/neptune-flyby',
] as const;
/** What is asked of the map: fluences of flybys against those of direct tracing. */
const FLUENCE_REL = 0.01;
/** Finer than the default, so that the step of the path does not hide the map. */
const STEP_TOLERANCE = 1e-4;
const SPECIES = { electron: ELECTRON_EDGES_MEV, proton: PROTON_EDGES_MEV } as const;

describe('fluences on the field map against direct tracing', () => {
  for (const name of FLYBYS) {
    it(name, () => {
      const { path } = readTrajectory(bytesOf(readFileSync(new URL(`../../../fixtures/${name}.oem`, import.meta.url))));
      const environment: EnvironmentChoice = {
        fieldModelId: path.planet === 'uranus' ? 'uranus-q3' : 'neptune-o8',
        rotationModelId: path.planet === 'uranus' ? 'uranus-2025' : 'neptune-2009',
        beltModelId: path.planet === 'uranus' ? 'uranus-belts-1' : 'neptune-belts-1',
        phase: { mode: 'offset', offsetDeg: 40 },
        sampledFieldModelIds: [],
      };
      const mapped = computeExposure(path, environment, { tolerance: STEP_TOLERANCE });
      const traced = computeExposure(path, environment, {
        tolerance: STEP_TOLERANCE,
        labellerFor: (id) => tracedLabeller(fieldModel(id)),
      });
      // A result says how it was labelled: by the map, or not.
      expect(mapped.artefact.inputsSha256).not.toBe(traced.artefact.inputsSha256);
      for (const species of ['electron', 'proton'] as const) {
        const fluence = ({ artefact }: Exposure) => {
          const edges = variantEdges(artefact, 0, species);
          return Array.from(SPECIES[species], (energy) => integralFluence(species, edges, energy));
        };
        const direct = fluence(traced);
        expect(direct[0]).toBeGreaterThan(1);
        fluence(mapped).forEach((value, i) => {
          if (direct[i] > 1) expect(Math.abs(value / direct[i] - 1)).toBeLessThan(FLUENCE_REL);
        });
      }
    });
  }
});

/** Fluences may change by no more than this when the step is made finer. */
const REFINEMENT_REL = 0.005;
/** A step of ln L between two samples 2 s apart that no smooth shell gives at 1.6 radii. */
const JUMP_LN_L = 0.03;
const SAMPLE_S = 2;

/** Times and sizes of the jumps of ln L inside 4 radii, published phase. */
function jumpsOfL(path: Path, labeller: MagneticLabeller): { epochTdbS: number; lnL: number }[] {
  const { referenceRadiusKm } = labeller.model;
  const state = new Float64Array(6);
  const axes = new Float64Array(9);
  const body = new Float64Array(3);
  const label = makeLabel();
  const jumps: { epochTdbS: number; lnL: number }[] = [];
  let previous = Number.NaN;
  const [{ startTdbS, stopTdbS }] = path.spans;
  for (let t = startTdbS; t < stopTdbS; t += SAMPLE_S) {
    path.stateInto(t, state);
    const [x, y, z] = [0, 1, 2].map((i) => state[i] / referenceRadiusKm);
    if (Math.hypot(x, y, z) > 4) continue;
    bodyAxesInto(ROTATION_MODELS['neptune-2009'], t, 0, axes);
    rotateInto(axes, x, y, z, body);
    labeller.labelInto(body[0], body[1], body[2], label);
    const lnL = label.reason === null ? Math.log(label.lShell) : Number.NaN;
    if (Math.abs(lnL - previous) > JUMP_LN_L) jumps.push({ epochTdbS: t, lnL: lnL - previous });
    previous = lnL;
  }
  return jumps;
}

describe('a jump of L on the path', () => {
  const url = new URL('../../../fixtures/demo/neptune-flyby.oem', import.meta.url);
  const { path } = readTrajectory(bytesOf(readFileSync(url)));
  const model = fieldModel('neptune-o8');

  it('lies at the same instant on the map as by tracing', () => {
    const direct = jumpsOfL(path, tracedLabeller(model));
    const mapped = jumpsOfL(path, fieldLabeller(model));
    expect(direct.length).toBeGreaterThan(0);
    expect(mapped.map((jump) => jump.epochTdbS)).toEqual(direct.map((jump) => jump.epochTdbS));
    mapped.forEach(({ lnL }, i) => {
      expect(Math.abs(lnL - direct[i].lnL)).toBeLessThan(FLUENCE_REL);
    });
  });

  it('is bisected: a finer step changes no fluence', () => {
    const fluence = (tolerance?: number) => {
      const { artefact } = computeExposure(
        path,
        {
          fieldModelId: 'neptune-o8',
          rotationModelId: 'neptune-2009',
          beltModelId: 'neptune-belts-1',
          phase: { mode: 'published' },
          sampledFieldModelIds: [],
        },
        tolerance === undefined ? {} : { tolerance },
      );
      const edges = variantEdges(artefact, 0, 'electron');
      return Array.from(ELECTRON_EDGES_MEV, (energy) => integralFluence('electron', edges, energy));
    };
    const finer = fluence(1e-5);
    expect(finer[0]).toBeGreaterThan(1);
    fluence().forEach((value, i) => {
      if (finer[i] > 1) expect(Math.abs(value / finer[i] - 1)).toBeLessThan(REFINEMENT_REL);
    });
  });
});
