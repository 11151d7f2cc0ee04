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
    readonly electron: Readonly<Record<keyof ShieldResponse['electron'], readonly number[]>>;
    readonly proton: Readonly<Record<keyof ShieldResponse['proton'], readonly number[]>>;
  }[];
}

let table: DoseDepthTable | undefined;

/**
 * Responses of aluminium slabs from 0.05 to 25 mm, open behind, to electrons, their bremsstrahlung and protons: the dose
 * in 0.1 mm of silicon behind them. Computed ahead by test/make/aluminiumResponses.ts; statistical errors included.
 */
export function aluminiumDoseDepth(): DoseDepthTable {
  table ??= load();
  return table;
}

function load(): DoseDepthTable {
  const stored = readReferenceJson<StoredTable>('responses-aluminium', 'slab.json');
  const { effort, engineVersion, targetMaterialId } = stored;
  return {
    geometry: 'slab',
    materialId: 'Al',
    densityGPerCm3: material('Al').densityGPerCm3,
    targetText: `0.1 mm of ${targetMaterialId} behind an aluminium slab, open behind; isotropic fluence on its outer face`,
    depthsMm: stored.rows.map((row) => row.depthMm),
    responses: stored.rows.map(({ sha256, description, notices, electron, proton }) => ({
      sha256,
      engineVersion,
      effort,
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
