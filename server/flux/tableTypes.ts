import type { PlanetId } from '../constants/planets.ts';
import { AppError, type ErrorPlace } from '../errors.ts';

/** One species of an uploaded belt table. */
export interface BeltTableBlock {
  /** Shape (nL,), ascending, in reference radii of the default field model of the planet. */
  readonly lShells: readonly number[];
  /** Shape (nPitch,), degrees, ascending, the last one 90. */
  readonly equatorialPitchAnglesDeg: readonly number[];
  /** Shape (nE,), MeV, ascending. */
  readonly energiesMeV: readonly number[];
  /** Shape (nL, nPitch, nE): differential unidirectional flux, cm⁻² s⁻¹ sr⁻¹ MeV⁻¹. */
  readonly intensityPerCm2SSrMeV: readonly (readonly (readonly number[])[])[];
  /** Shape (nL,): 1 σ of log₁₀ j, decades. */
  readonly sigmaDex?: readonly number[];
}

/** A belt table of the user: the planet it is of, where it comes from and what it is good for. */
export interface BeltTable {
  readonly name: string;
  readonly planet: PlanetId;
  readonly source: string;
  readonly validity: string;
  readonly species: { readonly electron?: BeltTableBlock; readonly proton?: BeltTableBlock };
}

interface AxisRule {
  readonly least: number;
  readonly most: number;
  readonly maxCount: number;
  readonly unit: string;
}
const L_RULE: AxisRule = { least: 1, most: 60, maxCount: 200, unit: 'reference radii' };
const PITCH_RULE: AxisRule = { least: 0, most: 90, maxCount: 91, unit: 'deg' };
const ENERGY_RULE: AxisRule = { least: 1e-3, most: 1e4, maxCount: 500, unit: 'MeV' };
const MAX_INTENSITY = 1e15;
const MAX_SIGMA_DEX = 3;

/**
 * Holds an uploaded table to its axes; the first thing wrong is named with field, row, value and limit.
 *
 * @throws {AppError} BELT_TABLE_INVALID
 */
export function checkBeltTable(table: BeltTable): void {
  const blocks = Object.entries(table.species).filter((entry) => entry[1] !== undefined);
  if (blocks.length === 0) refuse({ field: 'species', detail: 'needs an electron or a proton block', got: null });
  for (const [species, block] of blocks) checkBlock(`species.${species}`, block);
}

function checkBlock(field: string, block: BeltTableBlock): void {
  checkAxis(`${field}.lShells`, block.lShells, L_RULE);
  checkAxis(`${field}.equatorialPitchAnglesDeg`, block.equatorialPitchAnglesDeg, PITCH_RULE);
  checkAxis(`${field}.energiesMeV`, block.energiesMeV, ENERGY_RULE);
  const pitches = block.equatorialPitchAnglesDeg;
  const lastPitch = pitches[pitches.length - 1];
  if (lastPitch !== 90) {
    refuse({
      field: `${field}.equatorialPitchAnglesDeg[${pitches.length - 1}]`,
      detail: 'the last pitch angle is 90 degrees, or particles that mirror at the equator are lost',
      got: lastPitch,
      limit: 90,
      unit: 'deg',
    });
  }
  const cube = `${field}.intensityPerCm2SSrMeV`;
  checkCount(cube, block.intensityPerCm2SSrMeV, block.lShells.length, 'one sheet for each L');
  let any = false;
  block.intensityPerCm2SSrMeV.forEach((sheet, l) => {
    checkCount(`${cube}[${l}]`, sheet, pitches.length, 'one row for each pitch angle');
    sheet.forEach((row, m) => {
      checkCount(`${cube}[${l}][${m}]`, row, block.energiesMeV.length, 'one value for each energy');
      row.forEach((value, e) => {
        any ||= value > 0;
        if (value >= 0 && value <= MAX_INTENSITY) return;
        refuse({
          field: `${cube}[${l}][${m}][${e}]`,
          detail: `outside 0 to ${MAX_INTENSITY}`,
          got: value,
          limit: value < 0 ? 0 : MAX_INTENSITY,
          unit: 'cm^-2 s^-1 sr^-1 MeV^-1',
        });
      });
    });
  });
  if (!any) refuse({ field: cube, detail: 'every value is zero', got: 0 });
  if (block.sigmaDex === undefined) return;
  checkCount(`${field}.sigmaDex`, block.sigmaDex, block.lShells.length, 'one value for each L');
  block.sigmaDex.forEach((value, l) => {
    if (value >= 0 && value <= MAX_SIGMA_DEX) return;
    refuse({
      field: `${field}.sigmaDex[${l}]`,
      detail: `outside 0 to ${MAX_SIGMA_DEX}`,
      got: value,
      limit: value < 0 ? 0 : MAX_SIGMA_DEX,
      unit: 'decades',
    });
  });
}

function checkAxis(field: string, values: readonly number[], rule: AxisRule): void {
  if (values.length < 2 || values.length > rule.maxCount) {
    refuse({ field, detail: `needs 2 to ${rule.maxCount} values`, got: values.length, limit: rule.maxCount });
  }
  values.forEach((value, i) => {
    if (!(value >= rule.least && value <= rule.most)) {
      refuse({
        field: `${field}[${i}]`,
        detail: `outside ${rule.least} to ${rule.most}`,
        got: value,
        limit: value < rule.least ? rule.least : rule.most,
        unit: rule.unit,
      });
    }
    if (i > 0 && !(value > values[i - 1])) {
      refuse({
        field: `${field}[${i}]`,
        detail: 'not above the value before it',
        got: value,
        limit: values[i - 1],
        unit: rule.unit,
      });
    }
  });
}

function checkCount(field: string, values: readonly unknown[], count: number, what: string): void {
  if (values.length !== count) refuse({ field, detail: what, got: values.length, limit: count });
}

function refuse(place: ErrorPlace & { readonly field: string }): never {
  const { field, detail, got, limit, unit } = place;
  const bound = limit === undefined ? '' : `, limit ${limit}${unit === undefined ? '' : ` ${unit}`}`;
  throw new AppError('BELT_TABLE_INVALID', `${field}: ${detail} (given ${got}${bound}).`, [place]);
}
