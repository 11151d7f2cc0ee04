/** Small invented artefacts whose doses can be worked out by hand. */
import { contentHash } from '../../../server/canonical.ts';
import type { FluenceArtefact, FluxHistory, LBinSpread } from '../../../server/fluence/types.ts';
import type { EvidenceRegion } from '../../../server/flux/types.ts';
import type { AssessedTrajectory, AssessmentInput } from '../../../server/margin/input.ts';
import { ELECTRON_EDGES_MEV, edgesMeV, PROTON_EDGES_MEV, type Species } from '../../../server/numeric/spectrumGrid.ts';
import type { ShieldResponse } from '../../../server/shielding/types.ts';

export interface ToyFluence {
  readonly name?: string;
  /** One entry per (field model, offset). */
  readonly variants?: FluenceArtefact['variants'];
  readonly nominalVariant?: number;
  readonly groupDays?: readonly number[];
  readonly sides?: readonly ('anchor' | 'inside' | 'outside')[];
  readonly sigmaDex?: readonly number[];
  readonly sharedSigmaDex?: number;
  readonly energySigmaDex?: (species: Species, energyMeV: number) => number;
  /** cm⁻² MeV⁻¹. */
  readonly fluence: (at: {
    variant: number;
    group: number;
    bin: number;
    species: Species;
    energyMeV: number;
  }) => number;
  readonly region?: (species: Species, bin: number, energyMeV: number) => EvidenceRegion;
  readonly history?: FluxHistory;
}

const DAY_S = 86_400;

export function toyArtefact(toy: ToyFluence): FluenceArtefact {
  const variants = toy.variants ?? [{ fieldModelId: 'uranus-q3', offsetDeg: 0, weight: 1, primary: true }];
  const groupDays = toy.groupDays ?? [0];
  const sides = toy.sides ?? ['anchor'];
  const sharedSigmaDex = toy.sharedSigmaDex ?? 0.35;
  const spread: LBinSpread = {
    sharedSigmaDex,
    sigmaDex: Float64Array.from(sides, (_, bin) => toy.sigmaDex?.[bin] ?? sharedSigmaDex),
    side: sides,
  };
  const fill = (species: Species): Float32Array => {
    const edges = edgesMeV(species);
    const out = new Float32Array(variants.length * groupDays.length * sides.length * edges.length);
    let at = 0;
    for (let variant = 0; variant < variants.length; variant++) {
      for (let group = 0; group < groupDays.length; group++) {
        for (let bin = 0; bin < sides.length; bin++) {
          for (const energyMeV of edges) out[at++] = toy.fluence({ variant, group, bin, species, energyMeV });
        }
      }
    }
    return out;
  };
  const regions = (species: Species): EvidenceRegion[] => {
    const edges = edgesMeV(species);
    return sides.flatMap((_, bin) =>
      Array.from({ length: edges.length - 1 }, (__, i) => toy.region?.(species, bin, edges[i]) ?? 'sampled'),
    );
  };
  const energySigma = (species: Species): Float64Array =>
    edgesMeV(species).map((energy) => toy.energySigmaDex?.(species, energy) ?? 0);
  return {
    inputsSha256: contentHash({ toy: toy.name ?? 'toy' }),
    planet: 'uranus',
    beltModelId: 'toy-belts',
    variants,
    nominalVariant: toy.nominalVariant ?? 0,
    groups: groupDays.map((day) => ({ startTdbS: day * DAY_S, stopTdbS: day * DAY_S + 3600 })),
    lEdges: Float64Array.from({ length: sides.length + 1 }, (_, i) => 4 + i),
    spread: { electron: spread, proton: spread },
    energySigmaDex: { electron: energySigma('electron'), proton: energySigma('proton') },
    electron: fill('electron'),
    proton: fill('proton'),
    regions: { electron: regions('electron'), proton: regions('proton') },
    ...(toy.history === undefined ? {} : { history: toy.history }),
  };
}

export function toyTrajectory(
  toy: ToyFluence,
  over: Partial<AssessedTrajectory> & { mode?: 'published' | 'sweep' | 'drawn'; spanDays?: number } = {},
): AssessedTrajectory {
  const { mode = 'published', spanDays = 1, ...rest } = over;
  return {
    trajectoryId: 't1',
    name: toy.name ?? 'Toy flyby',
    sourceSha256: contentHash(toy.name ?? 'source'),
    environment: {
      fieldModelId: 'uranus-q3',
      rotationModelId: 'toy-rotation',
      beltModelId: 'toy-belts',
      phase: { mode },
    },
    startTdbS: 0,
    stopTdbS: spanDays * DAY_S,
    fluence: toyArtefact(toy),
    ...rest,
  };
}

export interface ToyResponse {
  readonly name?: string;
  /** Gy cm². */
  readonly electron?: (energyMeV: number) => number;
  readonly bremsstrahlung?: (energyMeV: number) => number;
  readonly proton?: (energyMeV: number) => number;
  readonly sigmaRel?: number;
  readonly transmitted?: (energyMeV: number) => number;
  readonly targetMaterialId?: ShieldResponse['targetMaterialId'];
}

export function toyResponse(toy: ToyResponse): ShieldResponse {
  const per = (species: Species, f: ((energyMeV: number) => number) | undefined): Float64Array => {
    const edges = species === 'electron' ? ELECTRON_EDGES_MEV : PROTON_EDGES_MEV;
    return Float64Array.from({ length: edges.length - 1 }, (_, i) => f?.(Math.sqrt(edges[i] * edges[i + 1])) ?? 0);
  };
  const dose = per('electron', toy.electron);
  const brems = per('electron', toy.bremsstrahlung);
  const sigma = toy.sigmaRel ?? 0;
  return {
    sha256: contentHash({ response: toy.name ?? 'toy' }),
    engineVersion: 'toy-1',
    effort: 'standard',
    referenceErrorRel: 0.02,
    targetMaterialId: toy.targetMaterialId ?? 'Si',
    description: 'Toy shield',
    electron: {
      doseGyCm2: dose,
      doseSigmaGyCm2: dose.map((value) => value * sigma),
      bremsstrahlungGyCm2: brems,
      bremsstrahlungSigmaGyCm2: brems.map((value) => value * sigma),
      transmitted: per('electron', toy.transmitted),
      transmittedSigma: per('electron', undefined),
      damageMeVCm2PerG: per('electron', () => 3e-5),
    },
    proton: {
      doseGyCm2: per('proton', toy.proton),
      transmitted: per('proton', undefined),
      damageMeVCm2PerG: per('proton', () => 2e-3),
    },
    notices: [],
  };
}

/** A one-case, one-option, one-part assessment to vary. */
export function toyInput(over: Partial<AssessmentInput> = {}): AssessmentInput {
  return {
    name: 'Toy assessment',
    study: {
      studyId: 's1',
      name: 'Toy study',
      requiredRdm: 2,
      verdictPercentile: 95,
      phaseTreatment: 'joint',
      extrapolatedShareLimit: 0.5,
    },
    trajectories: [toyTrajectory({ fluence: flatElectrons })],
    cases: [{ caseId: 'c1', name: 'Flyby', legs: [{ trajectoryId: 't1', repetitions: 1 }] }],
    options: [
      {
        optionId: 'o1',
        name: 'Thin',
        places: [
          {
            placeId: 'bay',
            name: 'Bay',
            geometry: 'slab',
            shieldText: '1 mm Al',
            massKg: 1,
            response: toyResponse({ name: 'thin', electron: unitAboveOneMeV }),
          },
        ],
      },
    ],
    parts: [{ partId: 'p1', name: 'Memory', placeId: 'bay', capabilityKradSi: 30, capabilityBasis: 'test' }],
    otherSources: [],
    sampling: { draws: 2000, seed: 7 },
    doseDepthTables: [],
    runtime: { engineVersion: 'test', nodeVersion: 'v20', architecture: 'x64' },
    ...over,
  };
}

/** 1e10 electrons per cm² and e-fold of energy, no protons: differential 1e10 / E. */
export function flatElectrons({ species, energyMeV }: { species: Species; energyMeV: number }): number {
  return species === 'electron' ? 1e10 / energyMeV : 0;
}

/** 1e-9 Gy cm² above 1 MeV. */
export function unitAboveOneMeV(energyMeV: number): number {
  return energyMeV >= 1 ? 1e-9 : 0;
}
