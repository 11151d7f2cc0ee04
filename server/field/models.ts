import type { PlanetId } from '../constants/planets.ts';
import { readReferenceJson } from '../constants/reference.ts';
import { AppError } from '../errors.ts';
import { RADIAN_PER_DEG } from '../units.ts';
import { offsetDipoleField } from './offsetDipole.ts';
import { type FieldFunction, type SchmidtCoefficient, sphericalHarmonicField } from './sphericalHarmonic.ts';
import type { FieldModel, FieldModelId } from './types.ts';

type Row = ['g' | 'h', number, number, number];

interface HarmonicData {
  readonly referenceRadiusKm: number;
  readonly degreeUsed: number;
  readonly coefficients: readonly Row[];
  readonly externalNt?: { readonly G10: number; readonly G11: number; readonly H11: number };
}

interface DipoleData {
  readonly referenceRadiusKm: number;
  readonly momentNt: number;
  readonly axisLatitudeDeg: number;
  readonly axisWestLongitudeDeg: number;
  readonly centre: readonly [number, number, number];
}

interface FieldData {
  readonly 'uranus-q3': HarmonicData;
  readonly 'uranus-ah5': HarmonicData;
  readonly 'neptune-o8': HarmonicData;
  readonly 'uranus-otd': DipoleData;
  readonly 'neptune-otd': DipoleData;
}

const DATA = readReferenceJson<FieldData>('fields', 'fields.json');

const Q3_SOURCE =
  'Connerney, Acuna & Ness (1987), J. Geophys. Res. 92, 15329, doi:10.1029/JA092iA13p15329; degrees 1 and 2';
const O8_SOURCE =
  'Connerney, Acuna & Ness (1991), J. Geophys. Res. 96 Suppl., 19023, doi:10.1029/91JA01165; degrees 1 to 3';

function schmidt(data: HarmonicData): SchmidtCoefficient[] {
  return data.coefficients.map(([kind, n, m, valueNt]) => ({ kind, n, m, valueNt }));
}

/** (g11, h11, g10): the dipole moment in nT a³. */
function dipoleMoment(data: HarmonicData): [number, number, number] {
  const find = (kind: 'g' | 'h', m: number) =>
    data.coefficients.find((row) => row[0] === kind && row[1] === 1 && row[2] === m);
  return [find('g', 1)?.[3] ?? 0, find('h', 1)?.[3] ?? 0, find('g', 0)?.[3] ?? 0];
}

function build(
  id: FieldModelId,
  planet: PlanetId,
  label: string,
  source: string,
  referenceRadiusKm: number,
  moment: readonly [number, number, number],
  fieldInto: FieldFunction,
): FieldModel {
  const dipoleMomentNt = Math.hypot(...moment);
  const dipoleAxis = Float64Array.from(moment, (component) => component / dipoleMomentNt);
  return { id, planet, label, source, referenceRadiusKm, dipoleMomentNt, dipoleAxis, fieldInto };
}

function harmonicModel(
  id: 'uranus-q3' | 'uranus-ah5' | 'neptune-o8',
  planet: PlanetId,
  label: string,
  source: string,
  externalField = false,
): FieldModel {
  const data = DATA[id];
  const external = data.externalNt;
  // A uniform field with potential coefficients G, H is −(G11, H11, G10) in Cartesian components.
  const uniform: [number, number, number] =
    externalField && external !== undefined ? [-external.G11, -external.H11, -external.G10] : [0, 0, 0];
  const fieldInto = sphericalHarmonicField(schmidt(data), data.degreeUsed, uniform);
  return build(id, planet, label, source, data.referenceRadiusKm, dipoleMoment(data), fieldInto);
}

function centredDipole(
  id: FieldModelId,
  planet: PlanetId,
  from: HarmonicData,
  label: string,
  source: string,
): FieldModel {
  const moment = dipoleMoment(from);
  return build(id, planet, label, source, from.referenceRadiusKm, moment, offsetDipoleField(moment, [0, 0, 0]));
}

function offsetTiltedDipole(
  id: 'uranus-otd' | 'neptune-otd',
  planet: PlanetId,
  label: string,
  source: string,
): FieldModel {
  const data = DATA[id];
  const latitude = data.axisLatitudeDeg * RADIAN_PER_DEG;
  const east = -data.axisWestLongitudeDeg * RADIAN_PER_DEG;
  const moment: [number, number, number] = [
    data.momentNt * Math.cos(latitude) * Math.cos(east),
    data.momentNt * Math.cos(latitude) * Math.sin(east),
    data.momentNt * Math.sin(latitude),
  ];
  return build(id, planet, label, source, data.referenceRadiusKm, moment, offsetDipoleField(moment, data.centre));
}

/** All field models, by id. Frame, units and reference radii: see FieldModel. */
export const FIELD_MODELS: Readonly<Record<FieldModelId, FieldModel>> = {
  'uranus-q3': harmonicModel('uranus-q3', 'uranus', 'Uranus Q3, degrees 1-2', Q3_SOURCE),
  'uranus-ah5': harmonicModel(
    'uranus-ah5',
    'uranus',
    'Uranus AH5, degrees 1-4',
    'Herbert (2009), J. Geophys. Res. 114, A11206, doi:10.1029/2009JA014394; resolved to degree 3 at best',
  ),
  'uranus-otd': offsetTiltedDipole(
    'uranus-otd',
    'uranus',
    'Uranus offset tilted dipole',
    'Ness et al. (1986), Science 233, 85, doi:10.1126/science.233.4759.85; offset vector second-hand',
  ),
  'uranus-dipole': centredDipole(
    'uranus-dipole',
    'uranus',
    DATA['uranus-q3'],
    'Uranus centred dipole (for comparison)',
    `Degree 1 of ${Q3_SOURCE}`,
  ),
  'neptune-o8': harmonicModel('neptune-o8', 'neptune', 'Neptune O8, degrees 1-3', O8_SOURCE),
  'neptune-otd': offsetTiltedDipole(
    'neptune-otd',
    'neptune',
    'Neptune offset tilted dipole (4-15 R_N)',
    'Ness et al. (1989), Science 246, 1473; offset components and axis longitude from memory',
  ),
  'neptune-dipole': centredDipole(
    'neptune-dipole',
    'neptune',
    DATA['neptune-o8'],
    'Neptune centred dipole (for comparison)',
    `Degree 1 of ${O8_SOURCE}`,
  ),
};

/** Q3 with the uniform external term of its own fit: for checks and for points far out. */
export const URANUS_Q3_WITH_EXTERNAL: FieldModel = harmonicModel(
  'uranus-q3',
  'uranus',
  'Uranus Q3, degrees 1-2, with its uniform external field',
  Q3_SOURCE,
  true,
);

export function isFieldModelId(id: string): id is FieldModelId {
  return Object.hasOwn(FIELD_MODELS, id);
}

/** @throws {AppError} FIELD_MODEL_UNKNOWN with the list of known ids */
export function fieldModel(id: string): FieldModel {
  if (isFieldModelId(id)) return FIELD_MODELS[id];
  const known = Object.keys(FIELD_MODELS).join(', ');
  throw new AppError('FIELD_MODEL_UNKNOWN', `Field model "${id}" is not known; known are ${known}.`, [
    { field: 'fieldModelId', detail: `one of ${known}`, got: id },
  ]);
}

/** The model the belts of a planet are written in. */
export function defaultFieldModel(planet: PlanetId): FieldModel {
  return FIELD_MODELS[planet === 'uranus' ? 'uranus-q3' : 'neptune-o8'];
}
