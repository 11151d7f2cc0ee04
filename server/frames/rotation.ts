import type { PlanetId } from '../constants/planets.ts';
import { DEG_PER_RADIAN, RADIAN_PER_DEG, SECONDS_PER_DAY } from '../units.ts';

/**
 * Where the planets' magnetic longitudes point at an epoch.
 *
 * Frames: ULS (Uranus) and NLS (Neptune), right-handed, z along the angular-momentum pole, east longitude. Uranus' z is
 * ANTI-parallel to the IAU north pole. Each model ties its period to the encounter that fixed its zero of longitude:
 * putting another period onto the J2000 origin would move the longitude of the 2040s by ten turns.
 */
export type RotationModelId = 'uranus-2025' | 'uranus-1986' | 'neptune-2009';

export interface RotationModel {
  readonly id: RotationModelId;
  readonly planet: PlanetId;
  readonly label: string;
  readonly source: string;
  readonly periodH: number;
  /** 1 σ of the period, hours. */
  readonly periodErrorH: number;
  /** Epoch of the encounter that fixed the longitude, TDB seconds past J2000. */
  readonly anchorTdbS: number;
  /** Prime-meridian angle at the anchor about the spin pole, degrees, without periodic terms. */
  readonly meridianAtAnchorDeg: number;
  readonly rateDegPerDay: number;
  /** Periodic terms in N = 357.85 + 52.316 T degrees (Neptune), zero elsewhere. */
  readonly pole: { readonly raDeg: number; readonly decDeg: number; readonly raSinN: number; readonly decCosN: number };
  readonly meridianSinN: number;
}

const DAYS_PER_CENTURY = 36_525;
/** 1986-01-24T18:00:00 UTC and 1989-08-25T03:56:00 UTC; TDB − UTC = 55.184 s and 56.184 s. */
const URANUS_ANCHOR_TDB_S = -5089.749361289 * SECONDS_PER_DAY;
const NEPTUNE_ANCHOR_DAYS = -3781.5 + (3 * 3600 + 56 * 60 + 56.184) / SECONDS_PER_DAY;
const NEPTUNE_ANCHOR_TDB_S = NEPTUNE_ANCHOR_DAYS * SECONDS_PER_DAY;
const NEPTUNE_RATE_DEG_PER_DAY = 536.3128492;
const URANUS_POLE = { raDeg: 77.311, decDeg: 15.175, raSinN: 0, decCosN: 0 } as const;

export const ROTATION_MODELS: Readonly<Record<RotationModelId, RotationModel>> = {
  'uranus-2025': {
    id: 'uranus-2025',
    planet: 'uranus',
    label: 'Uranus 2025: 17.247864 h, tied to the 1986 encounter',
    source:
      'Period: Lamy et al. (2025), Nature Astronomy, doi:10.1038/s41550-025-02492-z. Zero of longitude: ULS, 302° W under the spacecraft at 1986-01-24T18:00:00 UTC (PDS definition); meridian angle fitted to that definition. Pole: IAU WGCCRE, reversed to the spin pole.',
    periodH: 17.247864,
    periodErrorH: 1e-5,
    anchorTdbS: URANUS_ANCHOR_TDB_S,
    meridianAtAnchorDeg: 291.0544,
    rateDegPerDay: 500.9315936,
    pole: URANUS_POLE,
    meridianSinN: 0,
  },
  'uranus-1986': {
    id: 'uranus-1986',
    planet: 'uranus',
    label: 'Uranus 1986: 17.24 h',
    source:
      'Period: Desch, Connerney & Kaiser (1986); Warwick et al. (1986), Science 233, 102. Zero of longitude: ULS as for the 2025 model. Pole: IAU WGCCRE, reversed to the spin pole.',
    periodH: 17.24,
    periodErrorH: 0.01,
    anchorTdbS: URANUS_ANCHOR_TDB_S,
    // W_ULS = 110.3167° + 501.1600928° d at the anchor, d = −5089.749361289.
    meridianAtAnchorDeg: positiveDegrees(110.3167 + 501.1600928 * -5089.749361289),
    rateDegPerDay: 501.1600928,
    pole: URANUS_POLE,
    meridianSinN: 0,
  },
  'neptune-2009': {
    id: 'neptune-2009',
    planet: 'neptune',
    label: 'Neptune 2009: radio period, tied to the 1989 encounter',
    source:
      'IAU WGCCRE report of 2009 (Archinal et al. 2011; radio rotation 536.3128492°/day), not the cloud rate of 2015. Period error: Lecacheux et al. (1993), 16.108 ± 0.006 h. Zero of longitude: NLS, 167.7° W under the spacecraft at 1989-08-25T03:56:00 UTC (PDS definition).',
    periodH: (360 / NEPTUNE_RATE_DEG_PER_DAY) * 24,
    periodErrorH: 0.006,
    anchorTdbS: NEPTUNE_ANCHOR_TDB_S,
    meridianAtAnchorDeg: positiveDegrees(265.1987 + NEPTUNE_RATE_DEG_PER_DAY * NEPTUNE_ANCHOR_DAYS),
    rateDegPerDay: NEPTUNE_RATE_DEG_PER_DAY,
    pole: { raDeg: 299.36, decDeg: 43.46, raSinN: 0.7, decCosN: -0.51 },
    meridianSinN: -0.48,
  },
};

export function isRotationModelId(id: string): id is RotationModelId {
  return Object.hasOwn(ROTATION_MODELS, id);
}

export function defaultRotationModel(planet: PlanetId): RotationModel {
  return ROTATION_MODELS[planet === 'uranus' ? 'uranus-2025' : 'neptune-2009'];
}

/**
 * 1 σ of the magnetic longitude at an epoch, degrees, from the period error alone: the phase error grows by
 * 360° · (σ_P / P) per turn since the anchor. Above about 60° the phase is as good as unknown.
 */
export function phaseSigmaDeg(model: RotationModel, epochTdbS: number): number {
  const turns = Math.abs(epochTdbS - model.anchorTdbS) / (model.periodH * 3600);
  return (360 * turns * model.periodErrorH) / model.periodH;
}

/** Prime-meridian angle W about the spin pole, degrees in [0, 360), with the model's periodic term. */
export function meridianDeg(model: RotationModel, epochTdbS: number): number {
  const days = (epochTdbS - model.anchorTdbS) / SECONDS_PER_DAY;
  return positiveDegrees(
    model.meridianAtAnchorDeg + model.rateDegPerDay * days + model.meridianSinN * Math.sin(nodeAngleRadian(epochTdbS)),
  );
}

/** Unit vector of the spin pole in ICRF axes, shape (3,). */
export function spinPoleIcrf(model: RotationModel, epochTdbS: number): Float64Array {
  const axes = bodyAxesInto(model, epochTdbS, 0, new Float64Array(9));
  return axes.slice(6, 9);
}

/**
 * Rotation from ICRF axes to the body-fixed frame, v_body = A v_icrf.
 *
 * Rz(W) Rx(90° − δ) Rz(90° + α), the IAU convention about the spin pole.
 *
 * @param epochTdbS - TDB seconds past J2000
 * @param offsetDeg - turns the planet, and with it its field, by this angle eastwards against the model
 * @param out - shape (9,), row-major; overwritten
 * @source Archinal et al. (2018), Celest. Mech. Dyn. Astr. 130, 22, section 2
 */
export function bodyAxesInto(
  model: RotationModel,
  epochTdbS: number,
  offsetDeg: number,
  out: Float64Array,
): Float64Array {
  const n = nodeAngleRadian(epochTdbS);
  const { pole } = model;
  const ra = (pole.raDeg + pole.raSinN * Math.sin(n)) * RADIAN_PER_DEG;
  const dec = (pole.decDeg + pole.decCosN * Math.cos(n)) * RADIAN_PER_DEG;
  const w = (meridianDeg(model, epochTdbS) + offsetDeg) * RADIAN_PER_DEG;
  const sinA = Math.sin(ra);
  const cosA = Math.cos(ra);
  const sinD = Math.sin(dec);
  const cosD = Math.cos(dec);
  const sinW = Math.sin(w);
  const cosW = Math.cos(w);
  // Node of the equator on the ICRF equator: (−sin α, cos α, 0); the axis 90° east of it on the planet's equator:
  // (−cos α sin δ, −sin α sin δ, cos δ).
  out[0] = -sinA * cosW - cosA * sinD * sinW;
  out[1] = cosA * cosW - sinA * sinD * sinW;
  out[2] = cosD * sinW;
  out[3] = sinA * sinW - cosA * sinD * cosW;
  out[4] = -cosA * sinW - sinA * sinD * cosW;
  out[5] = cosD * cosW;
  out[6] = cosD * cosA;
  out[7] = cosD * sinA;
  out[8] = sinD;
  return out;
}

/** out = A v, shape (3,); `out` must not alias `v`. */
export function rotateInto(axes: Float64Array, x: number, y: number, z: number, out: Float64Array): Float64Array {
  out[0] = axes[0] * x + axes[1] * y + axes[2] * z;
  out[1] = axes[3] * x + axes[4] * y + axes[5] * z;
  out[2] = axes[6] * x + axes[7] * y + axes[8] * z;
  return out;
}

/** Planetocentric latitude and east longitude in [0, 360) of a body-fixed vector, degrees. */
export function latitudeLongitudeDeg(
  x: number,
  y: number,
  z: number,
): { latitudeDeg: number; eastLongitudeDeg: number } {
  return {
    latitudeDeg: Math.atan2(z, Math.hypot(x, y)) * DEG_PER_RADIAN,
    eastLongitudeDeg: positiveDegrees(Math.atan2(y, x) * DEG_PER_RADIAN),
  };
}

function nodeAngleRadian(epochTdbS: number): number {
  return (357.85 + (52.316 * epochTdbS) / (SECONDS_PER_DAY * DAYS_PER_CENTURY)) * RADIAN_PER_DEG;
}

function positiveDegrees(angleDeg: number): number {
  const turned = angleDeg % 360;
  return turned < 0 ? turned + 360 : turned;
}
