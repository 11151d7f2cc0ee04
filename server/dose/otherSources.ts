/** Dose from elsewhere than the belts: checked at the door, then added into the same tables under its own name. */
import { readReferenceJson } from '../constants/reference.ts';
import { AppError, type ErrorPlace } from '../errors.ts';
import { edgesMeV } from '../numeric/spectrumGrid.ts';
import { ELECTRON_BINS, PROTON_BINS } from './spectra.ts';
import type { FluenceSpectra, OtherFluenceInput, OtherSourceInput } from './types.ts';

/**
 * Checks one other source.
 *
 * @param pointer - JSON pointer of the source in the request, for the places of a refusal
 * @throws {AppError} OTHER_SOURCE_INVALID naming every faulty field
 */
export function checkOtherSource(input: OtherSourceInput, pointer: string): void {
  const places: ErrorPlace[] = [];
  for (const field of ['name', 'source', 'phase'] as const) {
    if (input[field].trim() === '') places.push({ pointer: `${pointer}/${field}`, field, detail: 'must not be empty' });
  }
  const kinds = [input.doseKradSi, input.doseDepth, input.fluence].filter((value) => value !== undefined).length;
  if (kinds !== 1) {
    places.push({ pointer, detail: 'needs exactly one of doseKradSi, doseDepth, fluence', got: kinds, limit: 1 });
  }
  if (input.doseKradSi !== undefined && !(Number.isFinite(input.doseKradSi) && input.doseKradSi >= 0)) {
    places.push({
      pointer: `${pointer}/doseKradSi`,
      field: 'doseKradSi',
      detail: 'must be a number of at least 0',
      got: input.doseKradSi,
      unit: 'krad(Si)',
    });
  }
  if (input.doseDepth !== undefined) {
    const { depthsMm, doseKradSi } = input.doseDepth;
    checkTable(places, `${pointer}/doseDepth`, 'depthsMm', depthsMm, 'doseKradSi', doseKradSi, true);
  }
  if (input.fluence !== undefined) {
    const { energiesMeV, differentialPerCm2MeV, integralPerCm2 } = input.fluence;
    const values = differentialPerCm2MeV ?? integralPerCm2 ?? [];
    const name = differentialPerCm2MeV === undefined ? 'integralPerCm2' : 'differentialPerCm2MeV';
    if ((differentialPerCm2MeV === undefined) === (integralPerCm2 === undefined)) {
      places.push({
        pointer: `${pointer}/fluence`,
        detail: 'needs exactly one of differentialPerCm2MeV and integralPerCm2',
      });
    } else {
      checkTable(places, `${pointer}/fluence`, 'energiesMeV', energiesMeV, name, values, false);
      const rise = integralPerCm2?.findIndex((value, i) => i > 0 && value > integralPerCm2[i - 1]) ?? -1;
      if (rise > 0) {
        places.push({
          pointer: `${pointer}/fluence/integralPerCm2/${rise}`,
          field: 'integralPerCm2',
          detail: 'an integral spectrum never rises with energy',
          got: integralPerCm2?.[rise] ?? null,
        });
      }
    }
  }
  if (places.length > 0) {
    const first = places[0];
    throw new AppError(
      'OTHER_SOURCE_INVALID',
      `The other source "${input.name}" is not usable: ${first.pointer} ${first.detail}.`,
      places,
    );
  }
}

/** Abscissae ascending and positive, values finite; positive throughout (`strict`) or not negative. */
function checkTable(
  places: ErrorPlace[],
  pointer: string,
  xName: string,
  x: readonly number[],
  yName: string,
  y: readonly number[],
  strict: boolean,
): void {
  if (x.length !== y.length || x.length < 2) {
    places.push({
      pointer,
      detail: `${xName} and ${yName} must have the same length of at least 2`,
      got: `${x.length} and ${y.length}`,
      limit: 2,
    });
    return;
  }
  for (let i = 0; i < x.length; i++) {
    if (!(Number.isFinite(x[i]) && x[i] > (i === 0 ? 0 : x[i - 1]))) {
      places.push({
        pointer: `${pointer}/${xName}/${i}`,
        field: xName,
        detail: 'must be above 0 and ascend',
        got: x[i],
      });
    }
    if (!(Number.isFinite(y[i]) && (strict ? y[i] > 0 : y[i] >= 0))) {
      const detail = strict ? 'must be a number above 0' : 'must be a number of at least 0';
      places.push({ pointer: `${pointer}/${yName}/${i}`, field: yName, detail, got: y[i] });
    }
  }
}

/** Fluence of another source on the grids of the responses, and what of it lies off the grid or the table. */
export interface OtherSpectra {
  readonly spectra: FluenceSpectra;
  /** Sentences about fluence that could not be carried through, empty when all of it was. */
  readonly notices: readonly string[];
}

/**
 * Bin-integrated fluence of another source: log-log between the given energies, nothing outside them.
 *
 * An integral spectrum gives each bin as the difference of its two edges; particles above its last energy have no
 * known energy, so they are left out and named in a notice with their number.
 */
export function otherSpectra(input: OtherFluenceInput): OtherSpectra {
  const edges = edgesMeV(input.species);
  const bins = new Float64Array(edges.length - 1);
  const energies = input.energiesMeV;
  const last = energies.length - 1;
  const notices: string[] = [];
  if (input.integralPerCm2 !== undefined) {
    const integral = input.integralPerCm2;
    // Outside the table the integral is held at its end values: no particles are invented there.
    const above = (energy: number): number =>
      energy <= energies[0]
        ? integral[0]
        : energy >= energies[last]
          ? integral[last]
          : logLog(energies, integral, energy);
    for (let bin = 0; bin < bins.length; bin++) bins[bin] = Math.max(0, above(edges[bin]) - above(edges[bin + 1]));
    if (integral[last] > 0) {
      notices.push(
        `${integral[last].toExponential(2)} ${input.species}s per cm² above ${energies[last]} MeV have no stated energy and are left out.`,
      );
    }
  } else {
    const differential = input.differentialPerCm2MeV ?? [];
    for (let bin = 0; bin < bins.length; bin++) {
      const low = Math.max(edges[bin], energies[0]);
      const high = Math.min(edges[bin + 1], energies[last]);
      bins[bin] = high > low ? integrateLogLog(energies, differential, low, high) : 0;
    }
  }
  if (energies[0] < edges[0] || energies[last] > edges[edges.length - 1]) {
    notices.push(
      `The shield responses cover ${edges[0]} to ${edges[edges.length - 1]} MeV for ${input.species}s; fluence outside is left out.`,
    );
  }
  const electron = input.species === 'electron';
  return {
    spectra: {
      electronPerCm2: electron ? bins : new Float64Array(ELECTRON_BINS),
      protonPerCm2: electron ? new Float64Array(PROTON_BINS) : bins,
    },
    notices,
  };
}

/** Value at x by straight lines in ln x, ln y; linear where one of the two ends is zero. x inside the table. */
function logLog(xs: readonly number[], ys: readonly number[], x: number): number {
  let low = 0;
  let high = xs.length - 1;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (xs[middle] <= x) low = middle;
    else high = middle;
  }
  if (ys[low] > 0 && ys[high] > 0) {
    const fraction = Math.log(x / xs[low]) / Math.log(xs[high] / xs[low]);
    return ys[low] * (ys[high] / ys[low]) ** fraction;
  }
  return ys[low] + ((ys[high] - ys[low]) * (x - xs[low])) / (xs[high] - xs[low]);
}

/** ∫ y dx over [from, to] of the log-log table, exact for its power laws, cut at every node inside. */
function integrateLogLog(xs: readonly number[], ys: readonly number[], from: number, to: number): number {
  const cuts = [from, ...xs.filter((x) => x > from && x < to), to];
  let sum = 0;
  for (let i = 0; i + 1 < cuts.length; i++) {
    const [a, b] = [cuts[i], cuts[i + 1]];
    const ya = logLog(xs, ys, a);
    const yb = logLog(xs, ys, b);
    if (ya > 0 && yb > 0) {
      const exponent = Math.log(yb / ya) + Math.log(b / a);
      const mean = Math.abs(exponent) < 1e-6 ? 1 + exponent / 2 : Math.expm1(exponent) / exponent;
      sum += ya * a * Math.log(b / a) * mean;
    } else {
      sum += 0.5 * (ya + yb) * (b - a);
    }
  }
  return sum;
}

interface KingEvent {
  readonly integralFluencePerCm2At30MeV: number;
  readonly eFoldingMeV: number;
  readonly fromMeV: number;
  readonly toMeV: number;
}

const KING = readReferenceJson<KingEvent>('king-1974', 'event.json');

/** Omnidirectional protons per cm² above an energy in one event of the form of King (1974), at 1 AU. */
export function kingEventIntegralPerCm2(energyMeV: number): number {
  return KING.integralFluencePerCm2At30MeV * Math.exp((30 - energyMeV) / KING.eFoldingMeV);
}

/**
 * An example fluence: solar protons of one event of the form of King (1974) at 1 AU, 10 to 200 MeV, scaled.
 *
 * It shows how such a source is carried through the shields; it is no cruise environment.
 *
 * @param scale - number of such events (or r⁻² times it), > 0
 * @source db/reference/king-1974/SOURCE.md
 */
export function kingEventExample(scale: number, phase: string): OtherSourceInput {
  if (!(scale > 0)) throw new TypeError(`scale must be above 0, got ${scale}`);
  const count = 60;
  const energiesMeV = Array.from(
    { length: count + 1 },
    (_, i) => KING.fromMeV * (KING.toMeV / KING.fromMeV) ** (i / count),
  );
  energiesMeV[count] = KING.toMeV;
  return {
    name: `Example: solar-proton event after King (1974), × ${scale}`,
    source: 'J.H. King (1974), J. Spacecraft and Rockets 11, 401-408; formula from memory; example only',
    phase,
    fluence: {
      species: 'proton',
      energiesMeV,
      differentialPerCm2MeV: energiesMeV.map((energy) => (scale * kingEventIntegralPerCm2(energy)) / KING.eFoldingMeV),
      example: true,
    },
  };
}
