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
