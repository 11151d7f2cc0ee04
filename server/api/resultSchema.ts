import { z } from 'zod';
import { RESULT_SCHEMA, VERDICT_REASONS, VERDICTS, type VerdictReason } from '../margin/index.ts';
import { defineRoute, type Route } from './routes.ts';
import { anyObject } from './schemas.ts';

/** The shape of an assessment result, units in the names; published as JSON Schema and held against results by a test. */
const text = z.string();
const number = z.number();
const numbers = z.array(number);
const sha256 = z.string().regex(/^[0-9a-f]{64}$/);
const share = number.min(0).describe('share, 0 to 1');
const planet = z.enum(['uranus', 'neptune']);
const percentiles = z.object({ p05: number, p50: number, p95: number });
const kradSi = (what: string) => number.describe(`${what}, krad(Si)`);
const doseParts = z
  .object({ electron: number, bremsstrahlung: number, proton: number, other: number, total: number })
  .describe('total is the sum of the other four');
const verdict = z.enum(VERDICTS);
const verdictCounts = z.record(verdict, number.int());
const reason = z.enum(Object.keys(VERDICT_REASONS) as VerdictReason[]);
const byEvidence = z.record(z.enum(['anchored', 'sampled', 'sampledQualitative', 'extrapolated']), share);
const targetMaterialId = z.enum(['Si', 'SiO2', 'GaAs']);
const uncertainty = z.object({
  source: z.enum(['electronBelt', 'protonBelt', 'timeVariation', 'rotationPhase', 'fieldModel', 'statisticalError']),
  share: share.describe('share of the variance of log₁₀ dose'),
});

const environment = z.object({
  fieldModelId: text,
  rotationModelId: text,
  beltModelId: text,
  phase: z.object({
    mode: z.enum(['published', 'offset', 'drawn', 'sweep']),
    offsetDeg: number.optional(),
    count: number.optional(),
  }),
  sampledFieldModelIds: z.array(text).optional(),
  satelliteDips: z.boolean().optional(),
  protonUpperBound: z.boolean().optional(),
  solarWindState: z.enum(['as-encountered', 'long-term-mean']).optional(),
});

const place = z.object({
  placeId: text,
  name: text,
  geometry: z.enum(['slab', 'sphere', 'shell', 'sectors', 'box']),
  shieldText: text.describe('layers outside first, each in mm, mil and g/cm²'),
  massKg: number.nullable(),
  response: z.object({ sha256, description: text, effort: z.enum(['standard', 'fine']), targetMaterialId }).nullable(),
  notAssessed: text.nullable(),
});

const part = z.object({
  partId: text,
  name: text,
  description: text,
  technology: text,
  placeId: text,
  capabilityKradSi: number.nullable(),
  capabilityBasis: z.enum(['test', 'dataSheet', 'lot', 'similarity', 'estimate']).nullable(),
  sampleSize: number.nullable(),
  doseRateRadSiPerS: number.nullable(),
  lot: z
    .object({
      sampleSize: number,
      geometricMeanKradSi: number,
      lnSd: number.describe('standard deviation of ln(failure dose), dimensionless'),
      confidence: number,
      probability: number,
      toleranceFactor: number.describe('one-sided K_TL(n, C, P)'),
    })
    .nullable(),
  requiredRdm: number,
  requiredRdmOwn: z.boolean(),
});

const fluence = z.object({
  trajectoryId: text,
  species: z.enum(['electron', 'proton']),
  energiesMeV: numbers,
  differentialPerCm2MeV: numbers.describe('omnidirectional, nominal, cm⁻² MeV⁻¹'),
  integralPerCm2: numbers.describe('omnidirectional above each energy, nominal, cm⁻²'),
  bands: z.array(z.object({ thresholdMeV: number, nominalPerCm2: number, bandPerCm2: percentiles })),
  byEvidence,
});

const doseDepth = z.object({
  caseId: text,
  geometry: z.enum(['slab', 'sphere']),
  materialId: text,
  targetText: text,
  depthsMm: numbers,
  depthsGPerCm2: numbers,
  electronKradSi: numbers,
  bremsstrahlungKradSi: numbers,
  protonKradSi: numbers,
  otherKradSi: numbers,
  totalKradSi: numbers,
  bandKradSi: z.object({ p05: numbers, p50: numbers, p95: numbers }),
});

const here = { caseId: text, optionId: text, placeId: text };

const shieldDose = z.object({
  ...here,
  notAssessed: text.nullable().describe('why there are no numbers, or null'),
  doseKradSi: doseParts.nullable().describe('nominal, krad(Si)'),
  band: percentiles.nullable().describe('krad(Si), from drawing belts, phase, field and statistical error together'),
  doseAtVerdictKradSi: number.nullable(),
  statisticalErrorRel: number.nullable().describe('1 σ of the nominal belt dose, relative'),
  extrapolatedFraction: number.nullable().describe('share of the dose from belts where nothing was measured'),
  byEvidence: byEvidence.nullable(),
  byLeg: z.array(z.object({ trajectoryId: text, repetitions: number, doseKradSi: number })),
  bySource: z.array(z.object({ name: text, phase: text, doseKradSi: number })),
  byPhase: z.array(z.object({ offsetDeg: number, doseKradSi: number })),
  worstPhase: z.object({ offsetDeg: number, doseKradSi: number }).nullable(),
  byFieldModel: z.array(z.object({ fieldModelId: text, doseKradSi: number })),
  uncertainty: z.array(uncertainty),
  peakDoseRate: z.object({ radSiPerS: number, utc: text, trajectoryId: text }).nullable(),
  damage: z
    .object({
      electronMeVPerG: number,
      protonMeVPerG: number,
      totalMeVPerG: number,
      neutronEquivalentPerCm2: number.describe('1 MeV neutrons of the same damage dose in silicon, cm⁻²'),
    })
    .nullable(),
  charging: z
    .object({
      peakCurrentPaPerCm2: number.nullable().describe('one way through the shield, pA/cm²'),
      peakUtc: text.nullable(),
      fluence10hPerCm2: number.nullable().describe('most electrons through the shield in any 10 h, cm⁻²'),
      currentLimitPaPerCm2: number,
      coldCurrentLimitPaPerCm2: number,
      fluence10hLimitPerCm2: number,
      currentFlag: z.enum(['below', 'aboveCold', 'above', 'unknown']),
      fluenceFlag: z.enum(['below', 'above', 'unknown']),
    })
    .nullable()
    .describe('screening; never a certificate'),
  otherTargets: z.array(z.object({ targetMaterialId, doseKrad: doseParts.describe('nominal, krad of that material') })),
});

const margin = z.object({
  partId: text,
  ...here,
  capabilityKradSi: number.nullable(),
  doseKradSi: number.nullable().describe('median dose at the part, krad(Si)'),
  doseP95KradSi: number.nullable(),
  doseAtVerdictKradSi: number.nullable(),
  requiredRdm: number,
  achievedRdm: number.nullable(),
  achievedRdmP95: number.nullable(),
  achievedRdmAtVerdict: number.nullable(),
  probabilityAboveDose: number.nullable(),
  confidence: number.nullable().describe('P(capability > required margin × dose)'),
  verdict,
  reason,
});

const comparison = z.object({
  ...here,
  massKg: number.nullable(),
  doseKradSi: percentiles.nullable(),
  nonDominated: z.boolean().nullable(),
  toBaseline: z.object({ massKg: number.nullable(), doseKradSi: number, doseRatio: number }).nullable(),
  lowestMargin: z.object({ partId: text, achievedRdmAtVerdict: number }).nullable(),
  verdictCounts,
});

const moved = z.object({ doseKradSi: number, ratio: number }).nullable();
const sensitivity = z.object({
  ...here,
  thinner10Pct: moved,
  thicker10Pct: moved,
  phase: z.object({ lowestKradSi: number, highestKradSi: number }).nullable(),
  beltsDoubledKradSi: kradSi('nominal dose with all belts doubled'),
  beltsHalvedKradSi: kradSi('nominal dose with all belts halved'),
  beltFactorAtRequirement: z.object({ partId: text, factor: number }).nullable(),
});

const lowestMargin = z.object({
  partId: text,
  ...here,
  achievedRdmAtVerdict: number,
  requiredRdm: number,
  verdict,
  worstPhaseOffsetDeg: number.nullable(),
  dominantUncertainty: uncertainty.nullable(),
  extrapolatedFraction: number,
});

export const assessmentResultSchema = z
  .object({
    schema: z.literal(RESULT_SCHEMA),
    name: text,
    study: z.object({
      studyId: text,
      name: text,
      requiredRdm: number,
      verdictPercentile: number,
      phaseTreatment: z.enum(['joint', 'worst']),
      extrapolatedShareLimit: share,
    }),
    trajectories: z.array(
      z.object({ trajectoryId: text, name: text, planet, sourceSha256: sha256, fluenceSha256: sha256, environment }),
    ),
    cases: z.array(
      z.object({
        caseId: text,
        name: text,
        planets: z.array(planet),
        legs: z.array(z.object({ trajectoryId: text, trajectoryName: text, repetitions: number })),
        passCount: number,
        phaseOfRepetitions: text,
      }),
    ),
    options: z.array(
      z.object({
        optionId: text,
        name: text,
        massKg: number.nullable(),
        baseline: z.boolean(),
        places: z.array(place),
      }),
    ),
    parts: z.array(part),
    otherSources: z.array(
      z.object({
        name: text,
        source: text,
        phase: text,
        kind: z.enum(['dose', 'doseDepth', 'fluence']),
        example: z.boolean(),
      }),
    ),
    fluence: z.array(fluence),
    doseDepth: z.array(doseDepth),
    shieldDose: z.array(shieldDose),
    margins: z.array(margin),
    comparison: z.array(comparison),
    sensitivity: z.array(sensitivity),
    summary: z.object({
      verdictCounts,
      byOption: z.array(z.object({ optionId: text, verdictCounts, lowestMargin: lowestMargin.nullable() })),
      lowestMargin: lowestMargin.nullable(),
      highestExtrapolatedFraction: number.nullable(),
      lightestMeetingOptionId: text.nullable(),
      whatWouldChange: z.array(text),
    }),
    verdictReasons: z.record(reason, text),
    notices: z.array(z.object({ code: text, severity: z.enum(['info', 'caution']), text })),
    provenance: z.object({
      engineVersion: text,
      nodeVersion: text,
      architecture: text,
      seed: number,
      draws: number,
      inputs: z.array(z.object({ kind: text, name: text, sha256 })),
      inputsSha256: sha256,
      models: z.array(z.object({ kind: z.enum(['field', 'rotation', 'belt', 'response']), modelId: text })),
      resultSha256: sha256.describe('over the canonical JSON (RFC 8785) of the result without record ids and times'),
    }),
  })
  .describe('Result of an assessment; null means not assessed or not asked for, never zero');

export function schemaRoutes(): Route[] {
  return [
    defineRoute({
      method: 'get',
      path: '/api/schemas/assessment-result.json',
      tag: 'assessments',
      summary: 'JSON Schema (2020-12) of the result of an assessment',
      answer: anyObject,
      handler: () => z.toJSONSchema(assessmentResultSchema, { io: 'input' }),
    }),
  ];
}
