import { z } from 'zod';

/** Shapes on the wire. Physical limits are checked by the rooms, which know why; here only what JSON may look like. */
const name = z.string().trim().min(1).max(200);
const id = z.string().min(1).max(64);

export const pageQuery = z.object({
  studyId: id.optional(),
  limit: z.coerce.number().int().min(1).max(500).default(100),
  cursor: z.string().regex(/^\d+$/, 'a cursor from an earlier answer').optional(),
});

export const studyBody = z.object({
  name,
  description: z.string().max(2000).default(''),
  requiredRdm: z.number().min(1).max(100).default(2),
  verdictPercentile: z.number().min(50).max(99.9).default(95),
  phaseTreatment: z.enum(['joint', 'worst']).default('joint'),
  extrapolatedShareLimit: z.number().min(0).max(1).default(0.5),
  distributionMark: z.string().max(100).default(''),
});

export const layerSchema = z
  .object({
    materialId: z.string().min(1).max(64),
    thicknessMm: z.number().optional(),
    thicknessMil: z.number().optional(),
    arealDensityGPerCm2: z.number().optional(),
  })
  .strict();

export const stackSchema = z.object({
  geometry: z.enum(['slab', 'sphere', 'shell']),
  innerRadiusMm: z.number().optional(),
  backing: z.enum(['none', 'same']).optional(),
  layers: z.array(layerSchema),
});

export const stackBody = stackSchema.extend({ studyId: id, name });

const vectorMm = z.tuple([z.number(), z.number(), z.number()]);
const boxFields = {
  innerSizeMm: vectorMm,
  walls: z.array(z.array(layerSchema)),
  positionMm: vectorMm.default([0, 0, 0]),
};
/** Boxes nest to the depth that is carried through. */
const innermostBox = z.object(boxFields);
const middleBox = z.object({ ...boxFields, inner: innermostBox.optional() });
const boxSchema = z.object({ ...boxFields, inner: middleBox.optional() });

const spotSchema = z.object({
  layers: z.array(layerSchema),
  coveredFraction: z.number().optional(),
  areaM2: z.number().positive().optional(),
});

export const shieldSchema = z.discriminatedUnion('kind', [
  z.object({ kind: z.literal('stack'), stack: stackSchema, spot: spotSchema.optional() }),
  z.object({
    kind: z.literal('sectors'),
    sectors: z
      .array(z.object({ name: name.optional(), fraction: z.number(), stack: stackSchema }))
      .min(1)
      .max(50),
    spot: spotSchema.optional(),
  }),
  z.object({
    kind: z.literal('box'),
    box: boxSchema,
    rays: z.number().optional(),
    pathRule: z.enum(['slant', 'minimum']).optional(),
    spot: spotSchema.optional(),
  }),
]);

export const responseBody = z.object({
  effort: z.enum(['standard', 'fine']).default('standard'),
  targetMaterialId: z.enum(['Si', 'SiO2', 'GaAs']).default('Si'),
});
export const shieldResponseBody = responseBody.extend({ shield: shieldSchema });

export const optionBody = z.object({
  studyId: id,
  name,
  places: z
    .array(
      z.object({
        placeId: z.string().trim().min(1).max(64),
        name,
        stackId: id.optional(),
        shield: shieldSchema.optional(),
        areaM2: z.number().positive().max(1e4).optional(),
        innerBoxMm: vectorMm.optional(),
        innerSphereRadiusMm: z.number().positive().max(1e4).optional(),
      }),
    )
    .min(1)
    .max(50),
});

export const partFields = z.object({
  partId: z.string(),
  name: z.string(),
  description: z.string().max(2000).optional(),
  technology: z.string().max(200).optional(),
  placeId: z.string(),
  capabilityKradSi: z.number().optional(),
  capabilityBasis: z.enum(['test', 'dataSheet', 'lot', 'similarity', 'estimate']).optional(),
  sampleSize: z.number().optional(),
  doseRateRadSiPerS: z.number().optional(),
  failureDosesKradSi: z.array(z.number()).max(1000).optional(),
  lotConfidence: z.number().optional(),
  lotProbability: z.number().optional(),
  requiredRdm: z.number().optional(),
});
export const partBody = partFields.extend({ studyId: id });

export const caseBody = z.object({
  studyId: id,
  name,
  legs: z
    .array(z.object({ trajectoryId: id, repetitions: z.number().int().min(1).max(1000).default(1) }))
    .min(1)
    .max(50),
});

export const phaseSchema = z.object({
  mode: z.enum(['published', 'offset', 'drawn', 'sweep']),
  offsetDeg: z.number().optional(),
  count: z.number().optional(),
});

export const environmentSchema = z.object({
  fieldModelId: z.string().max(64).optional(),
  rotationModelId: z.string().max(64).optional(),
  beltModelId: z.string().max(64).optional(),
  phase: phaseSchema.optional(),
  satelliteDips: z.boolean().optional(),
  protonUpperBound: z.boolean().optional(),
  solarWindState: z.enum(['as-encountered', 'long-term-mean']).optional(),
});

export const exposureBody = environmentSchema.extend({
  trajectoryId: id,
  thresholdsMeV: z
    .object({
      electron: z.array(z.number().min(0.02).max(100)).min(1).max(30).optional(),
      proton: z.array(z.number().min(0.01).max(1000)).min(1).max(30).optional(),
    })
    .optional(),
  compareFieldModelIds: z.array(z.string().max(64)).max(5).optional(),
  sampling: z
    .object({
      draws: z.number().int().min(100).max(10_000).default(1000),
      seed: z.number().int().min(0).max(4_294_967_295).default(1),
    })
    .optional(),
});

const fluenceSource = z.object({
  species: z.enum(['electron', 'proton']),
  energiesMeV: z.array(z.number()).min(2).max(2000),
  differentialPerCm2MeV: z.array(z.number()).optional(),
  integralPerCm2: z.array(z.number()).optional(),
  example: z.boolean().optional(),
});

export const otherSourceSchema = z.object({
  name,
  source: z.string().trim().min(1).max(500),
  phase: name,
  caseIds: z.array(id).optional(),
  doseKradSi: z.number().optional(),
  doseDepth: z.object({ depthsMm: z.array(z.number()), doseKradSi: z.array(z.number()) }).optional(),
  fluence: fluenceSource.optional(),
});

export const assessmentBody = z.object({
  studyId: id,
  name,
  caseIds: z.array(id).max(100).optional(),
  trajectoryIds: z.array(id).max(100).optional(),
  optionIds: z.array(id).max(100).optional(),
  stackIds: z.array(id).max(100).optional(),
  partIds: z.array(id).max(1000).optional(),
  environment: environmentSchema.default({}),
  verdictPercentile: z.number().min(50).max(99.9).optional(),
  requiredRdm: z.number().min(1).max(100).optional(),
  baselineOptionId: id.optional(),
  sensitivity: z.boolean().optional(),
  otherTargetMaterialIds: z
    .array(z.enum(['SiO2', 'GaAs']))
    .max(2)
    .optional(),
  otherSources: z.array(otherSourceSchema).max(50).default([]),
  sampling: z
    .object({
      draws: z.number().int().min(100).max(100_000).default(2000),
      seed: z
        .number()
        .int()
        .min(0)
        .max(2 ** 31)
        .default(1),
    })
    .default({ draws: 2000, seed: 1 }),
});

export const reportBody = z.object({
  assessmentId: id,
  title: name,
  documentNumber: name,
  issue: z.string().trim().min(1).max(20),
  dateUtc: z.iso.date(),
  preparer: z.string().max(200).default(''),
  checker: z.string().max(200).default(''),
  approver: z.string().max(200).default(''),
  distribution: z.string().max(100).default(''),
  previousReportId: id.optional(),
});

const vector = z.tuple([z.number(), z.number(), z.number()]);
export const fieldBody = z.object({
  fieldModelId: z.string().max(64),
  pointsBodyRadii: z.array(vector).min(1).max(5000),
  mirrorFieldFactor: z.number().default(1),
});

/** Fixed L: each drift shell takes a tenth of a second. */
export const adiabaticityQuery = z.object({
  species: z.enum(['electron', 'proton']),
  energyMeV: z.coerce.number(),
  equatorialPitchAngleDeg: z.coerce.number().default(45),
});

const elements = {
  planet: z.enum(['uranus', 'neptune']),
  name,
  studyId: id,
  periapsisUtc: z.string(),
  periapsisPlanetRadii: z.number(),
  inclinationDeg: z.number(),
  nodeDeg: z.number().default(0),
  argumentDeg: z.number().default(0),
};
/** A flyby by its elements, or by its arrival: v∞ (ICRF axes) and the point of the B-plane. */
export const flybyBody = z.union([
  z.object({ ...elements, vInfKmS: z.number(), limitPlanetRadii: z.number().optional() }),
  z.object({
    planet: elements.planet,
    name,
    studyId: id,
    periapsisUtc: z.string(),
    vInfIcrfKmS: z.tuple([z.number(), z.number(), z.number()]),
    bDotTKm: z.number(),
    bDotRKm: z.number(),
    limitPlanetRadii: z.number().optional(),
  }),
]);
export const orbitBody = z.object({
  ...elements,
  periodDays: z.number().optional(),
  apoapsisPlanetRadii: z.number().optional(),
  passes: z.number().optional(),
});

export const anyObject = z.record(z.string(), z.unknown());
export const page = z.object({ items: z.array(anyObject), nextCursor: z.string().nullable() });
export const accepted = z.object({ id: z.string(), jobId: z.string() });
