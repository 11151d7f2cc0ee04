/** Source: direct tracing of every point, which test/golden/field holds to an independent calculation. */
import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { bytesOf } from '../../../server/ephemeris/index.ts';
import { fieldModel, tracedLabeller } from '../../../server/field/index.ts';
import {
  computeExposure,
  type EnvironmentChoice,
  type Exposure,
  integralFluence,
  variantEdges,
} from '../../../server/fluence/index.ts';
import { ELECTRON_EDGES_MEV, PROTON_EDGES_MEV } from '../../../server/numeric/spectrumGrid.ts';
import { readTrajectory } from '../../../server/trajectory/index.ts';

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
