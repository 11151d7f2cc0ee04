import { readReferenceJson } from '../constants/reference.ts';
import { AppError } from '../errors.ts';
import type { Constituent, Material, SternheimerFit } from './types.ts';

interface MaterialRow {
  readonly name: string;
  readonly densityGPerCm3: number;
  readonly meanExcitationEv: number;
  readonly plasmaEv: number;
  readonly sternheimer: readonly [number, number, number, number, number, number];
  readonly composition: Readonly<Record<string, number>>;
  readonly source: string;
}

interface MaterialData {
  readonly elements: Readonly<Record<string, readonly [number, number]>>;
  readonly materials: Readonly<Record<string, MaterialRow>>;
}

const DATA = readReferenceJson<MaterialData>('materials', 'materials.json');

const MATERIALS: ReadonlyMap<string, Material> = new Map(
  Object.entries(DATA.materials).map(([id, row]) => [id, buildMaterial(id, row)]),
);

/** Mass fractions of a mixture must sum to one within this. */
export const FRACTION_SUM_TOLERANCE = 1e-6;

/** All built-in materials: elements first, then compounds and alloys. */
export function materials(): readonly Material[] {
  return [...MATERIALS.values()];
}

/**
 * @param pointer - JSON pointer of the id in a request, for the place of a refusal
 * @throws {AppError} MATERIAL_UNKNOWN
 */
export function material(id: string, pointer?: string): Material {
  const found = MATERIALS.get(id);
  if (found !== undefined) return found;
  throw new AppError('MATERIAL_UNKNOWN', `Material "${id}" is not known; GET /api/materials lists ${MATERIALS.size}.`, [
    { ...(pointer === undefined ? {} : { pointer }), field: 'materialId', detail: 'not in the list', got: id },
  ]);
}

export interface MixtureInput {
  readonly id: string;
  readonly name: string;
  readonly densityGPerCm3: number;
  /** Mass fractions by chemical symbol. */
  readonly massFractions: Readonly<Record<string, number>>;
  readonly source: string;
}

/**
 * A material from mass fractions: I by Bragg additivity on ln I (ICRU 37: in non-conducting compounds light elements
 * take H 19.2, C 81, N 82, O 106 eV and others 1.13 I), density effect by the general fit of Sternheimer & Peierls (1971).
 *
 * @throws {AppError} MIXTURE_INVALID on unknown symbols, fractions out of range or not summing to one, density ≤ 0
 */
export function mixture(input: MixtureInput, conductor = false): Material {
  const entries = Object.entries(input.massFractions);
  const sum = entries.reduce((total, [, fraction]) => total + fraction, 0);
  if (!(Math.abs(sum - 1) <= FRACTION_SUM_TOLERANCE)) {
    throw new AppError(
      'MIXTURE_INVALID',
      `Mass fractions of "${input.id}" sum to ${sum}; they must sum to 1 within ${FRACTION_SUM_TOLERANCE}.`,
      [{ field: 'massFractions', detail: 'do not sum to one', got: sum, limit: 1 }],
    );
  }
  if (!(input.densityGPerCm3 > 0 && input.densityGPerCm3 <= 25)) {
    throw new AppError(
      'MIXTURE_INVALID',
      `Density of "${input.id}" is ${input.densityGPerCm3} g/cm³; above 0 to 25 is allowed.`,
      [{ field: 'densityGPerCm3', detail: 'out of range', got: input.densityGPerCm3, limit: 25, unit: 'g/cm³' }],
    );
  }
  let zOverA = 0;
  let logI = 0;
  for (const [symbol, fraction] of entries) {
    const element = DATA.elements[symbol];
    if (element === undefined || !(fraction > 0 && fraction <= 1)) {
      throw new AppError(
        'MIXTURE_INVALID',
        `Constituent ${symbol} of "${input.id}" is unknown or its fraction ${fraction} is not in (0, 1].`,
        [
          {
            field: `massFractions.${symbol}`,
            detail: 'unknown element or fraction out of range',
            got: fraction,
            limit: 1,
          },
        ],
      );
    }
    const share = (fraction * element[0]) / element[1];
    zOverA += share;
    logI += share * Math.log(excitationInMixtureEv(symbol, conductor));
  }
  const meanExcitationEv = Math.exp(logI / zOverA);
  const plasmaEv = 28.816 * Math.sqrt(input.densityGPerCm3 * zOverA);
  return buildMaterial(input.id, {
    name: input.name,
    densityGPerCm3: input.densityGPerCm3,
    meanExcitationEv,
    plasmaEv,
    sternheimer: generalDensityEffect(meanExcitationEv, plasmaEv),
    composition: input.massFractions,
    source: input.source,
  });
}

const LIGHT_IN_COMPOUNDS_EV: Readonly<Record<string, number>> = { H: 19.2, C: 81, N: 82, O: 106 };

function excitationInMixtureEv(symbol: string, conductor: boolean): number {
  const light = LIGHT_IN_COMPOUNDS_EV[symbol];
  if (!conductor && light !== undefined) return light;
  const row = DATA.materials[symbol];
  // Elements without an entry of their own: I ≈ Z (9.76 + 58.8 Z^−1.19) eV (Sternheimer, as quoted by ICRU 37).
  const z = DATA.elements[symbol][0];
  const value = row?.meanExcitationEv ?? z * (9.76 + 58.8 * z ** -1.19);
  return conductor ? value : 1.13 * value;
}

/** Sternheimer & Peierls (1971), Phys. Rev. B 3, 3681: parameters from I and the plasma energy alone, condensed matter. */
function generalDensityEffect(meanExcitationEv: number, plasmaEv: number): MaterialRow['sternheimer'] {
  const cBar = 2 * Math.log(meanExcitationEv / plasmaEv) + 1;
  const light = meanExcitationEv < 100;
  const x1 = light ? 2 : 3;
  const knee = light ? 3.681 : 5.215;
  const x0 = cBar < knee ? 0.2 : 0.326 * cBar - (light ? 1 : 1.5);
  const k = 3;
  const a = (cBar - 2 * Math.LN10 * x0) / (x1 - x0) ** k;
  return [a, k, x0, x1, cBar, 0];
}

function buildMaterial(id: string, row: MaterialRow): Material {
  const [a, k, x0, x1, cBar, delta0] = row.sternheimer;
  const sternheimer: SternheimerFit = { a, k, x0, x1, cBar, delta0 };
  const constituents: Constituent[] = Object.entries(row.composition).map(([symbol, massFraction]) => {
    const [z, atomicMassGPerMol] = DATA.elements[symbol];
    return { symbol, z, atomicMassGPerMol, massFraction };
  });
  return {
    id,
    name: row.name,
    densityGPerCm3: row.densityGPerCm3,
    meanExcitationEv: row.meanExcitationEv,
    plasmaEv: row.plasmaEv,
    sternheimer,
    constituents,
    source: row.source,
  };
}

/** Z/A of a material, mol/g. */
export function zOverA(of: Material): number {
  return of.constituents.reduce((sum, c) => sum + (c.massFraction * c.z) / c.atomicMassGPerMol, 0);
}
