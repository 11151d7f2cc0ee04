/**
 * The one list of everything that can be refused, and the one class that refuses it.
 *
 * Each code carries its HTTP status, a fixed title and a paragraph of help that GET /api/problems/:code serves.
 * Statuses: 400 unreadable · 401/403/404/409/413/415/429 as in HTTP · 422 readable but refused · 503 queue full.
 * Add codes under the heading of the room that throws them.
 */
interface ErrorRow {
  readonly status: number;
  readonly title: string;
  readonly help: string;
}

export const ERROR_CODES = {
  // --- shell
  INTERNAL: {
    status: 500,
    title: 'Internal error',
    help: 'Something inside the service failed. The log holds the details under the instance id of this problem; your input was not changed.',
  },
  NOT_FOUND: {
    status: 404,
    title: 'Not found',
    help: 'Nothing is stored under this address. It may have been deleted, or the id is mistyped.',
  },
  REQUEST_INVALID: {
    status: 422,
    title: 'Request does not fit its schema',
    help: 'The body or query does not match the schema of this call. Each entry of `errors` names the field, what was given and what is allowed.',
  },
  // --- numeric, constants, matter
  MATERIAL_UNKNOWN: {
    status: 422,
    title: 'Unknown material',
    help: 'The material id is neither in the built-in list (GET /api/materials) nor a chemical symbol that list contains.',
  },
  // --- dose
  OTHER_SOURCE_INVALID: {
    status: 422,
    title: 'Other dose source is not usable',
    help: 'A dose source beside the belts needs a name, a citation, a mission phase and exactly one of a dose, a dose-depth table (ascending depths, positive doses) or a fluence spectrum (ascending energies, no negative values).',
  },
  DOSE_DEPTH_OUTSIDE_SPAN: {
    status: 422,
    title: 'Depth lies outside the dose-depth table',
    help: 'A dose-depth table is read between its first and last depth only. Supply a table that spans the thickness asked for; nothing is extrapolated.',
  },
  // --- margin
  PART_INVALID: {
    status: 422,
    title: 'Part is not usable',
    help: 'A part needs an id, a name, a place, and either a capability in krad(Si) with its basis or at least two failure doses; required margin, sample size and dose rate must be above zero. Each entry of `errors` names the row and column or the field.',
  },
  PARTS_CSV_INVALID: {
    status: 422,
    title: 'Parts table is not usable',
    help: 'A parts table is CSV in UTF-8 with a header line. Columns: partId, name, description, technology, placeId, capabilityKradSi, capabilityBasis, sampleSize, doseRateRadSiPerS, failureDosesKradSi (separated by spaces or semicolons), lotConfidence, lotProbability, requiredRdm. Each entry of `errors` names row and column.',
  },
  ASSESSMENT_INVALID: {
    status: 422,
    title: 'Assessment request does not hold together',
    help: 'Cases must name trajectories of the request, parts and options must be there, percentile, draws and margins must lie in their ranges. Each entry of `errors` names the field.',
  },
  THICKNESS_UNREACHABLE: {
    status: 422,
    title: 'No thickness in the range meets the target',
    help: 'The dose or margin asked for is not met at the thickest allowed layer, or is met already at the thinnest. Widen the range, choose another layer or material, or lower the target.',
  },
} as const satisfies Record<string, ErrorRow>;

export type ErrorCode = keyof typeof ERROR_CODES;

/** One faulty place in the input: where it is, what was found there, and the limit it breaks. */
export interface ErrorPlace {
  /** JSON pointer into the request, for example `#/layers/0/thicknessMm`. */
  readonly pointer?: string;
  /** 1-based line of an uploaded text file. */
  readonly line?: number;
  /** Field, keyword or column name. */
  readonly field?: string;
  readonly detail: string;
  readonly got?: string | number | boolean | null;
  readonly limit?: string | number;
  readonly unit?: string;
}

/**
 * A refusal that the caller can act on. Anything else that is thrown is a defect of ours.
 *
 * @param code - key of ERROR_CODES
 * @param detail - one sentence for this caller that names field or line, value and limit, with units
 * @param places - the faulty places, when there are any to point at
 */
export class AppError extends Error {
  readonly code: ErrorCode;
  readonly places: readonly ErrorPlace[];

  constructor(code: ErrorCode, detail: string, places: readonly ErrorPlace[] = [], options?: { cause?: unknown }) {
    super(detail, options);
    this.name = 'AppError';
    this.code = code;
    this.places = places;
  }
}
