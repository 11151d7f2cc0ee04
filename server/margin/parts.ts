/** Parts: checked at the door, then reduced to a capability, a predictive distribution and a required margin. */
import type { ErrorPlace } from '../errors.ts';
import { AppError } from '../errors.ts';
import type { PartInput } from './input.ts';
import { DEFAULT_LOT_CONFIDENCE, DEFAULT_LOT_PROBABILITY, lotCapability, predictivePoints } from './lot.ts';
import type { CapabilityBasis, ResultPart } from './result.ts';

export const CAPABILITY_BASES: readonly CapabilityBasis[] = ['test', 'dataSheet', 'lot', 'similarity', 'estimate'];
/** Largest lot of single failure doses a part may carry. */
const MAX_FAILURE_DOSES = 1000;
/** Points of the predictive distribution of a lot that probabilities are averaged over. */
const PREDICTIVE_POINTS = 400;

/** A part ready for the margin tables. */
export interface PreparedPart {
  readonly row: ResultPart;
  /** krad(Si), ascending, of equal probability: what the next device may stand. One entry when no scatter is known. */
  readonly capabilityPointsKradSi: Float64Array;
}

/**
 * Every fault of one part, for a refusal that names them all.
 *
 * @param place - turns a field name into where it stands: a JSON pointer, or a row and column
 */
export function partFaults(part: PartInput, place: (field: string) => Partial<ErrorPlace>): ErrorPlace[] {
  const faults: ErrorPlace[] = [];
  const fault = (field: keyof PartInput, detail: string, got?: string | number, limit?: string | number): void => {
    faults.push({
      field,
      ...place(field),
      detail,
      ...(got === undefined ? {} : { got }),
      ...(limit === undefined ? {} : { limit }),
    });
  };
  for (const field of ['partId', 'name', 'placeId'] as const) {
    if (part[field].trim() === '') fault(field, 'must not be empty');
  }
  const positive = (field: 'capabilityKradSi' | 'doseRateRadSiPerS' | 'requiredRdm', unit: string): void => {
    const value = part[field];
    if (value !== undefined && !(Number.isFinite(value) && value > 0)) {
      fault(field, `must be a number above 0 ${unit}`.trim(), value, 0);
    }
  };
  positive('capabilityKradSi', 'krad(Si)');
  positive('doseRateRadSiPerS', 'rad(Si)/s');
  positive('requiredRdm', '');
  if (part.sampleSize !== undefined && !(Number.isInteger(part.sampleSize) && part.sampleSize >= 1)) {
    fault('sampleSize', 'must be a whole number of at least 1', part.sampleSize, 1);
  }
  for (const field of ['lotConfidence', 'lotProbability'] as const) {
    const value = part[field];
    if (value !== undefined && !(value >= 0.5 && value <= 0.9999)) {
      fault(field, 'must lie from 0.5 to 0.9999', value, 0.9999);
    }
  }
  const doses = part.failureDosesKradSi;
  if (doses === undefined) {
    if (part.capabilityKradSi === undefined) {
      fault('capabilityKradSi', 'a part needs a capability in krad(Si) or the failure doses of a lot');
    } else if (part.capabilityBasis === undefined) {
      fault('capabilityBasis', `must say what the capability rests on: ${CAPABILITY_BASES.join(', ')}`);
    }
  } else {
    if (part.capabilityKradSi !== undefined) {
      fault('capabilityKradSi', 'must be left out when failure doses are given: the capability is computed from them');
    }
    if (part.capabilityBasis !== undefined && part.capabilityBasis !== 'lot') {
      fault('capabilityBasis', 'must be lot when failure doses are given', part.capabilityBasis, 'lot');
    }
    if (doses.length < 2 || doses.length > MAX_FAILURE_DOSES) {
      fault('failureDosesKradSi', `needs 2 to ${MAX_FAILURE_DOSES} doses`, doses.length, MAX_FAILURE_DOSES);
    }
    const bad = doses.findIndex((dose) => !(Number.isFinite(dose) && dose > 0));
    if (bad >= 0) fault('failureDosesKradSi', `dose ${bad + 1} must be a number above 0 krad(Si)`, doses[bad], 0);
    if (part.sampleSize !== undefined && part.sampleSize !== doses.length) {
      fault('sampleSize', 'must equal the number of failure doses', part.sampleSize, doses.length);
    }
  }
  if (part.capabilityBasis !== undefined && !CAPABILITY_BASES.includes(part.capabilityBasis)) {
    fault('capabilityBasis', `must be one of ${CAPABILITY_BASES.join(', ')}`, part.capabilityBasis);
  }
  return faults;
}

/** @throws {AppError} PART_INVALID naming every faulty field of one part by JSON pointer */
export function checkPart(part: PartInput): void {
  const faults = partFaults(part, (field) => ({ pointer: `#/${field}` }));
  if (faults.length > 0) {
    throw new AppError('PART_INVALID', `${faults[0].pointer}: ${faults[0].detail}.`, faults);
  }
}

/**
 * Checks a list of parts.
 *
 * @throws {AppError} PART_INVALID naming every faulty field by JSON pointer, a repeated id among them
 */
export function checkParts(parts: readonly PartInput[], pointer = '#/parts'): void {
  const faults = parts.flatMap((part, i) => partFaults(part, (field) => ({ pointer: `${pointer}/${i}/${field}` })));
  const seen = new Map<string, number>();
  parts.forEach((part, i) => {
    const first = seen.get(part.partId);
    if (first === undefined) seen.set(part.partId, i);
    else {
      faults.push({
        pointer: `${pointer}/${i}/partId`,
        field: 'partId',
        detail: `repeats the id of part ${first + 1}`,
        got: part.partId,
      });
    }
  });
  if (faults.length > 0) {
    throw new AppError('PART_INVALID', `${faults[0].pointer}: ${faults[0].detail}.`, faults);
  }
}

/** Capability, scatter and required margin of a part; a part without capability comes back with null there. */
export function preparePart(part: PartInput, studyRequiredRdm: number): PreparedPart {
  const common = {
    partId: part.partId,
    name: part.name,
    description: part.description ?? '',
    technology: part.technology ?? '',
    placeId: part.placeId,
    doseRateRadSiPerS: part.doseRateRadSiPerS ?? null,
    requiredRdm: part.requiredRdm ?? studyRequiredRdm,
    requiredRdmOwn: part.requiredRdm !== undefined,
  };
  if (part.failureDosesKradSi !== undefined) {
    const { limitKradSi, ...lot } = lotCapability(
      part.failureDosesKradSi,
      part.lotConfidence ?? DEFAULT_LOT_CONFIDENCE,
      part.lotProbability ?? DEFAULT_LOT_PROBABILITY,
    );
    return {
      row: {
        ...common,
        capabilityKradSi: limitKradSi,
        capabilityBasis: 'lot',
        sampleSize: lot.sampleSize,
        lot,
      },
      // Equal failure doses leave no scatter: one point says the same as many.
      capabilityPointsKradSi: predictivePoints(lot, lot.lnSd > 0 ? PREDICTIVE_POINTS : 1),
    };
  }
  const capability = part.capabilityKradSi;
  return {
    row: {
      ...common,
      capabilityKradSi: capability ?? null,
      capabilityBasis: part.capabilityBasis ?? null,
      sampleSize: part.sampleSize ?? null,
      lot: null,
    },
    capabilityPointsKradSi: capability === undefined ? new Float64Array(0) : Float64Array.of(capability),
  };
}
