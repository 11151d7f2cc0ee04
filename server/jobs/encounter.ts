import { PLANETS } from '../constants/planets.ts';
import { fieldLinePoints, fieldModel } from '../field/index.ts';
import type { EncounterView } from '../figures/encounterScene.ts';
import { rotationModelFor } from '../fluence/index.ts';
import { bodyAxesInto, spinPoleIcrf } from '../frames/rotation.ts';
import { sunDirectionIcrf } from '../frames/sunDirection.ts';
import { formatUtc } from '../time/index.ts';
import type { Path } from '../trajectory/index.ts';

export interface EncounterInput {
  readonly fieldModelId: string;
  readonly rotationModelId: string;
  readonly offsetDeg: number;
  readonly closestTdbS: number;
}

/** Field lines that the picture shows, by the distance at which they leave the dipole's equator, reference radii. */
const LINE_DISTANCES = [3, 6, 10];
const LINE_POINTS = 40;
const PATH_POINTS = 400;

/**
 * What a picture of an encounter shows, in ICRF axes and planet radii: the path, and the planet's axes and field lines as they
 * stand at closest approach.
 */
export function encounterView(path: Path, input: EncounterInput): EncounterView {
  const planet = PLANETS[path.planet];
  const model = fieldModel(input.fieldModelId);
  const rotation = rotationModelFor(input.rotationModelId, path.planet);
  const axes = new Float64Array(9);
  bodyAxesInto(rotation, input.closestTdbS, input.offsetDeg, axes);
  const toIcrf = ([x, y, z]: ArrayLike<number> & Iterable<number>): [number, number, number] => [
    axes[0] * x + axes[3] * y + axes[6] * z,
    axes[1] * x + axes[4] * y + axes[7] * z,
    axes[2] * x + axes[5] * y + axes[8] * z,
  ];
  const [dx, dy, dz] = model.dipoleAxis;
  // The plane of spin axis and dipole axis, and the one across it.
  const inPlane = normalised([-dz * dx, -dz * dy, 1 - dz * dz]);
  const across = [
    dy * inPlane[2] - dz * inPlane[1],
    dz * inPlane[0] - dx * inPlane[2],
    dx * inPlane[1] - dy * inPlane[0],
  ];
  const scale = model.referenceRadiusKm / planet.equatorialRadiusKm;
  const fieldLines = LINE_DISTANCES.flatMap((distance) =>
    [inPlane, inPlane.map((v) => -v), across, across.map((v) => -v)].map((direction) => {
      const start = direction.map((v) => v * distance) as [number, number, number];
      const flat = fieldLinePoints(model, start, LINE_POINTS);
      const points: [number, number, number][] = [];
      for (let i = 0; i < flat.length; i += 3) {
        points.push(toIcrf([flat[i] * scale, flat[i + 1] * scale, flat[i + 2] * scale]));
      }
      return points;
    }),
  );
  const state = new Float64Array(6);
  const total = path.spans.reduce((sum, span) => sum + span.stopTdbS - span.startTdbS, 0);
  const samples = path.spans.flatMap((span) => {
    const count = Math.max(2, Math.round((PATH_POINTS * (span.stopTdbS - span.startTdbS)) / total));
    return Array.from({ length: count + 1 }, (_, k) => {
      const epochTdbS = span.startTdbS + ((span.stopTdbS - span.startTdbS) * k) / count;
      path.stateInto(epochTdbS, state);
      return {
        hoursFromClosest: (epochTdbS - input.closestTdbS) / 3600,
        utc: formatUtc(epochTdbS, 0),
        position: [0, 1, 2].map((i) => state[i] / planet.equatorialRadiusKm) as [number, number, number],
      };
    });
  });
  path.stateInto(input.closestTdbS, state);
  const pole = spinPoleIcrf(rotation, input.closestTdbS);
  return {
    planet: path.planet,
    fieldModelId: model.id,
    oblateness: planet.polarRadiusKm / planet.equatorialRadiusKm,
    spinAxis: [pole[0], pole[1], pole[2]],
    dipoleAxis: toIcrf(model.dipoleAxis),
    sunDirection: sunDirectionIcrf(path.planet, input.closestTdbS),
    fieldLines,
    path: samples,
    closest: {
      utc: formatUtc(input.closestTdbS, 0),
      position: [0, 1, 2].map((i) => state[i] / planet.equatorialRadiusKm) as [number, number, number],
    },
  };
}

function normalised(vector: readonly number[]): number[] {
  const length = Math.hypot(...vector);
  return vector.map((value) => value / length);
}
