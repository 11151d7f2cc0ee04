import { PLANETS, type PlanetId } from '../../../server/constants/planets.ts';
import { bytesOf } from '../../../server/ephemeris/index.ts';
import { type Conic, planeStateInto } from '../../../server/trajectory/conic.ts';
import {
  readTrajectory,
  type TrajectoryReading,
  type TrajectoryRequest,
  writeOem,
} from '../../../server/trajectory/index.ts';

/** Epoch of the invented closest approach, TDB s past J2000. */
export const PERIAPSIS_TDB_S = 1.4e9;

export function read(content: string | Uint8Array, request: TrajectoryRequest = {}): TrajectoryReading {
  return readTrajectory(bytesOf(typeof content === 'string' ? new TextEncoder().encode(content) : content), request);
}

/** A hyperbola in the plane x, y tilted about x by 0.5 rad. */
export function conicState(
  planet: PlanetId,
  periapsisRadii: number,
  eccentricity: number,
  epochTdbS: number,
): number[] {
  const { gmKm3S2, equatorialRadiusKm } = PLANETS[planet];
  const conic: Conic = { gmKm3S2, periapsisKm: periapsisRadii * equatorialRadiusKm, eccentricity };
  const [x, y, vx, vy] = planeStateInto(conic, epochTdbS - PERIAPSIS_TDB_S, new Float64Array(4));
  const c = Math.cos(0.5);
  const s = Math.sin(0.5);
  return [x, c * y, s * y, vx, c * vy, s * vy];
}

export interface Block {
  readonly fromS: number;
  readonly toS: number;
  readonly stepS: number;
}

/** An invented flyby of Uranus as a message, a block for each entry, times relative to closest approach. */
export function flyby(
  blocks: readonly Block[],
  options: { periapsisRadii?: number; center?: string; scale?: number } = {},
): string {
  const { periapsisRadii = 1.5, center = 'URANUS', scale = 1 } = options;
  return writeOem({
    objectName: 'INVENTED PROBE',
    objectId: '2040-001A',
    originator: 'INVENTED',
    creationDate: '2026-01-01T00:00:00',
    centerName: center,
    headerComments: [],
    segments: blocks.map(({ fromS, toS, stepS }) => {
      const epochs: number[] = [];
      for (let t = fromS; t <= toS; t += stepS) epochs.push(PERIAPSIS_TDB_S + t);
      return {
        comments: [],
        epochsTdbS: epochs,
        states: epochs.flatMap((epoch) =>
          conicState('uranus', periapsisRadii, 1.4, epoch).map((value) => scale * value),
        ),
        interpolation: 'HERMITE',
        degree: 7,
      };
    }),
  });
}

export function codes(reading: TrajectoryReading): string[] {
  return reading.summary.notices.map(({ code }) => code);
}
