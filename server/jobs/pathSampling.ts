import { PLANETS } from '../constants/planets.ts';
import { evaluatePoint, type FieldPoint, fieldLabeller, fieldModel, makeLabel } from '../field/index.ts';
import { rotationModelFor } from '../fluence/index.ts';
import { bodyAxesInto, latitudeLongitudeDeg, rotateInto } from '../frames/rotation.ts';
import { formatUtc } from '../time/index.ts';
import type { Path } from '../trajectory/index.ts';
import { DEG_PER_RADIAN } from '../units.ts';

export interface SamplePathInput {
  readonly fieldModelId: string;
  readonly rotationModelId: string;
  readonly offsetDeg: number;
  readonly stepS: number | null;
  readonly maxPoints: number;
}

/** A path sampled in time with its field coordinates: equal-length arrays, as on the wire. */
export interface SampledPathRows {
  readonly epochTdbS: number[];
  readonly utc: string[];
  readonly positionKm: [number, number, number][];
  readonly radiusPlanetRadii: number[];
  readonly latitudeDeg: number[];
  readonly eastLongitudeDeg: number[];
  readonly magneticLatitudeDeg: number[];
  readonly bNt: number[];
  readonly bMinNt: (number | null)[];
  readonly lShell: (number | null)[];
  readonly trapped: boolean[];
}

/** Samples every span at a constant step, or at as many points as asked for. */
export function samplePath(path: Path, input: SamplePathInput): SampledPathRows {
  const model = fieldModel(input.fieldModelId);
  const rotation = rotationModelFor(input.rotationModelId, path.planet);
  const labeller = fieldLabeller(model);
  const label = makeLabel();
  const state = new Float64Array(6);
  const axes = new Float64Array(9);
  const body = new Float64Array(3);
  const total = path.spans.reduce((sum, span) => sum + span.stopTdbS - span.startTdbS, 0);
  const stepS = Math.max(input.stepS ?? 0, total / Math.max(1, input.maxPoints - path.spans.length));
  const rows: SampledPathRows = {
    epochTdbS: [],
    utc: [],
    positionKm: [],
    radiusPlanetRadii: [],
    latitudeDeg: [],
    eastLongitudeDeg: [],
    magneticLatitudeDeg: [],
    bNt: [],
    bMinNt: [],
    lShell: [],
    trapped: [],
  };
  for (const span of path.spans) {
    const count = Math.max(1, Math.floor((span.stopTdbS - span.startTdbS) / stepS));
    for (let k = 0; k <= count; k++) {
      const t = span.startTdbS + ((span.stopTdbS - span.startTdbS) * k) / count;
      path.stateInto(t, state);
      bodyAxesInto(rotation, t, input.offsetDeg, axes);
      rotateInto(axes, state[0], state[1], state[2], body);
      const radiusKm = Math.hypot(body[0], body[1], body[2]);
      const place = latitudeLongitudeDeg(body[0], body[1], body[2]);
      const along =
        (body[0] * model.dipoleAxis[0] + body[1] * model.dipoleAxis[1] + body[2] * model.dipoleAxis[2]) / radiusKm;
      const scale = 1 / model.referenceRadiusKm;
      labeller.labelInto(body[0] * scale, body[1] * scale, body[2] * scale, label);
      const closed = Number.isFinite(label.lShell);
      rows.epochTdbS.push(t);
      rows.utc.push(formatUtc(t));
      rows.positionKm.push([state[0], state[1], state[2]]);
      rows.radiusPlanetRadii.push(radiusKm / PLANETS[path.planet].equatorialRadiusKm);
      rows.latitudeDeg.push(place.latitudeDeg);
      rows.eastLongitudeDeg.push(place.eastLongitudeDeg);
      rows.magneticLatitudeDeg.push(Math.asin(along) * DEG_PER_RADIAN);
      rows.bNt.push(label.bNt);
      rows.bMinNt.push(closed ? label.bMinNt : null);
      rows.lShell.push(closed ? label.lShell : null);
      rows.trapped.push(label.reason === null);
    }
  }
  return rows;
}

export interface EvaluateFieldInput {
  readonly fieldModelId: string;
  readonly pointsBodyRadii: readonly (readonly [number, number, number])[];
  readonly mirrorFieldFactor: number;
}

export function evaluateField(input: EvaluateFieldInput): { points: FieldPoint[] } {
  const model = fieldModel(input.fieldModelId);
  return { points: input.pointsBodyRadii.map((point) => evaluatePoint(model, point, input.mirrorFieldFactor)) };
}
