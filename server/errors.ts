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
  BODY_UNREADABLE: {
    status: 400,
    title: 'Body unreadable',
    help: 'The body is not what its media type says: JSON that does not parse, or a multipart body without a part named file.',
  },
  TOKEN_NEEDED: {
    status: 401,
    title: 'Token needed',
    help: 'This service was started with a TOKEN. Send it as Authorization: Bearer followed by the token.',
  },
  HOST_REFUSED: {
    status: 403,
    title: 'Host or origin refused',
    help: 'Requests must name this service as their host, and requests that change something must come from its own pages or from no page at all.',
  },
  CONFLICT: {
    status: 409,
    title: 'Not in this state',
    help: 'The item is not in a state that allows the call, for example a report of an assessment that is not done, or the deletion of something that is still in use.',
  },
  VERSION_MISMATCH: {
    status: 412,
    title: 'Changed in between',
    help: 'The item was changed since you read it. Read it again, and send the ETag of the newest version as If-Match.',
  },
  TOO_LARGE: {
    status: 413,
    title: 'Too large',
    help: 'Uploads are limited by MAX_UPLOAD_MB, JSON bodies to 8 MB.',
  },
  // --- numeric, constants, matter
  MATERIAL_UNKNOWN: {
    status: 422,
    title: 'Unknown material',
    help: 'The material id is neither in the built-in list (GET /api/materials) nor a chemical symbol that list contains.',
  },
  MIXTURE_INVALID: {
    status: 422,
    title: 'Mixture refused',
    help: 'A material of your own needs a density above 0 to 25 g/cm³ and mass fractions of known elements, each in (0, 1], that sum to one within 1e-6.',
  },
  // --- time, ephemeris
  EPOCH_UNREADABLE: {
    status: 422,
    title: 'Epoch cannot be read',
    help: 'An epoch is YYYY-MM-DDThh:mm:ss[.d][Z] or YYYY-DDDThh:mm:ss[.d][Z] with all leading zeros. The second 60 exists only in UTC at a leap second, and UTC only from 1972-01-01.',
  },
  EPHEMERIS_UNREADABLE: {
    status: 400,
    title: 'File is no ephemeris that can be read',
    help: 'The file is empty, compressed, damaged or of another kind. Readable are: CCSDS orbit ephemeris messages (text or XML, versions 1 to 3), binary SPK kernels, and CSV tables whose columns name their units.',
  },
  OEM_INVALID: {
    status: 422,
    title: 'Orbit ephemeris message is not valid',
    help: 'The message breaks a rule of CCSDS 502.0-B-3 (or 505.0-B-3 for XML). The problem names the line and the rule. Nothing is repaired: correct the file where it is written.',
  },
  CSV_INVALID: {
    status: 422,
    title: 'Ephemeris table is not usable',
    help: 'A CSV ephemeris has a header line, one epoch column and three position and three velocity columns whose units are named, then rows of numbers with ascending epochs. Columns with other names are mapped on upload by `columns`. The problem names line and column.',
  },
  SPK_INVALID: {
    status: 400,
    title: 'SPK kernel is damaged',
    help: 'The binary kernel is truncated, was changed by a transfer in text mode, or its records contradict each other. Transfer it again in binary mode and compare sizes.',
  },
  SPK_TYPE_REFUSED: {
    status: 422,
    title: 'SPK data type is not supported',
    help: 'Readable are SPK data types 1, 2, 3, 5, 8, 9, 12, 13, 18 and 21 in the frames J2000 and ECLIPJ2000. Export the trajectory in one of these.',
  },
  TIME_SYSTEM_REFUSED: {
    status: 422,
    title: 'Time system is not supported',
    help: 'Readable are UTC, TAI, TT, TDB, TCB and GPS. Mission clocks (MET, MRT, SCLK) and sidereal time need an agreement between the parties, UT1 needs Earth-orientation data; convert to one of the readable scales.',
  },
  FRAME_REFUSED: {
    status: 422,
    title: 'Reference frame is not supported',
    help: 'Readable are the inertial frames EME2000, J2000, ICRF, GCRF and ECLIPJ2000. Rotating frames, frames of date and planet-equator frames would need an orientation that the file does not define; export in an inertial frame.',
  },
  // --- trajectory
  CENTER_REFUSED: {
    status: 422,
    title: 'Centre of the ephemeris is not usable',
    help: 'States must be relative to Uranus, Neptune or their barycentre. A text ephemeris about the Sun or the solar-system barycentre would need the planet as well; export it relative to the planet. An SPK kernel may carry the planet itself.',
  },
  PLANET_NEEDED: {
    status: 422,
    title: 'Planet is not settled',
    help: 'The file does not settle which planet the trajectory belongs to, or it settles another one than the request names. Give `planet` as uranus or neptune.',
  },
  TARGET_NEEDED: {
    status: 422,
    title: 'Spacecraft is not settled',
    help: 'The kernel holds several bodies, or not the one asked for. Give `targetId`, one of the ids that the problem lists.',
  },
  TRAJECTORY_EMPTY: {
    status: 422,
    title: 'Nothing of the trajectory can be evaluated',
    help: 'No stretch of time is left in which the spacecraft is known relative to the planet: the segments are too short, or the kernel does not carry what links the spacecraft to the planet.',
  },
  TRAJECTORY_OUTSIDE_SPAN: {
    status: 422,
    title: 'Epoch lies outside the trajectory',
    help: 'A trajectory is evaluated only inside its usable spans; nothing is extrapolated.',
  },
  SKETCH_INVALID: {
    status: 422,
    title: 'Sketched trajectory is not possible',
    help: 'Periapsis must lie outside the planet, speeds and periods above zero, angles within a turn, and the path within the limits of states and passes. Each entry of `errors` names the field.',
  },
  // --- shielding
  STACK_INVALID: {
    status: 422,
    title: 'Stack refused',
    help: 'A stack has 1 to 20 layers, outside first, each of a known material and of 0.0001 to 500 mm, given in exactly one of thicknessMm, thicknessMil or arealDensityGPerCm2; at most 200 g/cm² in all. A shell needs innerRadiusMm.',
  },
  SHIELD_INVALID: {
    status: 422,
    title: 'Shield refused',
    help: 'Sectors are shares of 4π that sum to 1 within 1e-6, each behind a stack. A box has three inner sizes, six walls (+x, −x, +y, −y, +z, −z) and a part that lies inside; at most 3 boxes nest and each fits with its walls into the next. A spot shield covers a share above 0 and up to 1. Each entry of `errors` names the field.',
  },
  BEAM_INVALID: {
    status: 422,
    title: 'Beam case refused',
    help: 'A beam case has particle (electron, photon or proton), energyMeV, incidence ("cosine" or angleDeg from 0 to below 90), layers with materialId and thicknessGPerCm2 (at most 200 g/cm² in all), bins, histories, seed and photons.',
  },
  RESPONSE_UNSUPPORTED: {
    status: 422,
    title: 'No response for this shield',
    help: 'The particles cannot be carried through a shield of this geometry. The problem names the geometry and what is possible.',
  },
  // --- field
  FIELD_MODEL_UNKNOWN: {
    status: 422,
    title: 'Unknown field model',
    help: 'The field model id is not in the list of GET /api/field-models, or belongs to the other planet.',
  },
  FIELD_POINT_INVALID: {
    status: 422,
    title: 'Point outside the validity of the field',
    help: 'Points are given in reference radii of the field model, in its body-fixed frame, at 0.5 to 30 radii from the centre; the mirror field factor is at least 1.',
  },
  // --- flux
  BELT_MODEL_UNKNOWN: {
    status: 422,
    title: 'Unknown belt model',
    help: 'The belt model id is neither built in nor an uploaded belt table (GET /api/belt-models), or it is for the other planet.',
  },
  BELT_TABLE_INVALID: {
    status: 422,
    title: 'Belt table refused',
    help: 'A belt table has, per species, ascending axes of L, equatorial pitch angle (ending at 90 degrees) and energy, and one differential unidirectional flux for each of their nodes, 0 to 1e15 cm^-2 s^-1 sr^-1 MeV^-1. The error names the field with its row and the limit.',
  },
  BELT_OPTION_REFUSED: {
    status: 422,
    title: 'Option does not apply to a belt table',
    help: 'Satellite dips, the proton upper bound and the long-term mean are scenarios of the built-in belts. An uploaded belt table is used as it is.',
  },
  // --- fluence
  ROTATION_MODEL_UNKNOWN: {
    status: 422,
    title: 'Unknown rotation model',
    help: 'The rotation model id is not in the list of GET /api/rotation-models, or belongs to the other planet.',
  },
  PHASE_INVALID: {
    status: 422,
    title: 'Rotation phase out of range',
    help: 'The phase treatment is published, offset (with offsetDeg from -360 to 360), drawn, or sweep (with a count from 4 to 360).',
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
