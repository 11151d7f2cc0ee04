import { readReferenceJson } from '../constants/reference.ts';
import { material } from '../matter/index.ts';
import type { EffortClass, ShieldResponse, TargetMaterialId } from '../shielding/types.ts';
import type { DoseDepthTable } from './types.ts';

interface StoredTable {
  readonly engineVersion: string;
  readonly effort: EffortClass;
  readonly targetMaterialId: TargetMaterialId;
  readonly rows: readonly {
    readonly depthMm: number;
    readonly sha256: string;
    readonly description: string;
    readonly notices: readonly string[];
    readonly referenceErrorRel: number;
    readonly electron: Readonly<Record<keyof ShieldResponse['electron'], readonly number[]>>;
    readonly proton: Readonly<Record<keyof ShieldResponse['proton'], readonly number[]>>;
  }[];
}

const tables: { [geometry in DoseDepthTable['geometry']]?: DoseDepthTable } = {};

const TARGETS: Readonly<Record<DoseDepthTable['geometry'], (targetMaterialId: string) => string>> = {
  slab: (of) => `0.1 mm of ${of} behind an aluminium slab, open behind; isotropic fluence on its outer face`,
  sphere: (of) => `a ball of ${of} of 0.1 mm radius at the centre of a solid aluminium sphere; isotropic fluence`,
};

/**
 * Responses of aluminium from 0.01 to 50 mm, slabs open behind or solid spheres, to electrons, their bremsstrahlung and
 * protons: the dose in silicon. Computed ahead by test/make/aluminiumResponses.ts; statistical errors included.
 */
export function aluminiumDoseDepth(geometry: DoseDepthTable['geometry'] = 'slab'): DoseDepthTable {
  const known = tables[geometry] ?? load(geometry);
  tables[geometry] = known;
  return known;
}

/** The response of an aluminium slab or sphere with this key, if it ships. */
export function aluminiumResponse(sha256: string): ShieldResponse | null {
  for (const geometry of ['slab', 'sphere'] as const) {
    const known = aluminiumDoseDepth(geometry).responses.find((response) => response.sha256 === sha256);
    if (known !== undefined) return known;
  }
  return null;
}

function load(geometry: DoseDepthTable['geometry']): DoseDepthTable {
  const stored = readReferenceJson<StoredTable>('responses-aluminium', `${geometry}.json`);
  const { effort, engineVersion, targetMaterialId } = stored;
  return {
    geometry,
    materialId: 'Al',
    densityGPerCm3: material('Al').densityGPerCm3,
    targetText: TARGETS[geometry](targetMaterialId),
    depthsMm: stored.rows.map((row) => row.depthMm),
    responses: stored.rows.map(({ sha256, description, notices, referenceErrorRel, electron, proton }) => ({
      sha256,
      engineVersion,
      effort,
      referenceErrorRel,
      targetMaterialId,
      description,
      notices,
      electron: {
        doseGyCm2: Float64Array.from(electron.doseGyCm2),
        doseSigmaGyCm2: Float64Array.from(electron.doseSigmaGyCm2),
        bremsstrahlungGyCm2: Float64Array.from(electron.bremsstrahlungGyCm2),
        bremsstrahlungSigmaGyCm2: Float64Array.from(electron.bremsstrahlungSigmaGyCm2),
        transmitted: Float64Array.from(electron.transmitted),
        transmittedSigma: Float64Array.from(electron.transmittedSigma),
        damageMeVCm2PerG: Float64Array.from(electron.damageMeVCm2PerG),
      },
      proton: {
        doseGyCm2: Float64Array.from(proton.doseGyCm2),
        transmitted: Float64Array.from(proton.transmitted),
        damageMeVCm2PerG: Float64Array.from(proton.damageMeVCm2PerG),
      },
    })),
  };
}
