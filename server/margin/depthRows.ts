/** Dose-depth curves of a case, with the band of the drawn belts. */
import { type DoseDepthTable, doseDepthCurve, foldDose, readDoseDepth } from '../dose/index.ts';
import { arealDensityGPerCm2, GY_PER_KRAD, gyToKrad } from '../units.ts';
import type { PreparedCase } from './caseRows.ts';
import { nodeWeights } from './nodeWeights.ts';
import { caseSpectra } from './nominal.ts';
import type { PreparedSource } from './otherDose.ts';
import { percentile } from './percentiles.ts';
import type { DoseDepthRow, ResultNotice } from './result.ts';

/** A curve needs no more draws than this for a band that is read off a figure. */
export const CURVE_DRAWS = 1000;

/** One row for each table: nominal dose by source at every depth, and p05, p50, p95 of the total. */
export function depthRows(
  prepared: PreparedCase,
  tables: readonly DoseDepthTable[],
  draws: number,
): { rows: DoseDepthRow[]; notices: ResultNotice[] } {
  const spectra = caseSpectra(prepared.legs);
  const notices: ResultNotice[] = [];
  const rows = tables.map((table): DoseDepthRow => {
    const curve = doseDepthCurve(spectra, table);
    const other = table.depthsMm.map((depthMm, i) => otherAtDepth(prepared, depthMm, table, i));
    const otherGy = other.map(({ doseGy }) => doseGy);
    for (const name of new Set(other.flatMap(({ left }) => left))) {
      notices.push({
        code: 'OTHER_SOURCE_NOT_IN_CURVE',
        severity: 'info',
        text: `The dose-depth curve behind ${table.materialId} (${table.geometry}) leaves out "${name}" wherever it is not given as a function of depth.`,
      });
    }
    const columns = table.responses.map((response) => ({
      weights: {
        electron: nodeWeights(
          prepared.reference.electron,
          response.electron.doseGyCm2.map((dose, bin) => dose + response.electron.bremsstrahlungGyCm2[bin]),
        ),
        proton: nodeWeights(prepared.reference.proton, response.proton.doseGyCm2),
      },
      statisticalErrorRel: 0,
      errorDeviates: null,
      constantGy: 0,
    }));
    const { doses } = prepared.sampler.sample(columns, Math.min(draws, CURVE_DRAWS));
    for (const values of doses) values.sort();
    const band = (percent: number): number[] =>
      doses.map((values, i) => gyToKrad(percentile(values, percent) + otherGy[i]));
    return {
      caseId: prepared.caseId,
      geometry: table.geometry,
      materialId: table.materialId,
      targetText: table.targetText,
      depthsMm: [...table.depthsMm],
      depthsGPerCm2: table.depthsMm.map((depthMm) => arealDensityGPerCm2(depthMm, table.densityGPerCm3)),
      electronKradSi: Array.from(curve.electronGy, gyToKrad),
      bremsstrahlungKradSi: Array.from(curve.bremsstrahlungGy, gyToKrad),
      protonKradSi: Array.from(curve.protonGy, gyToKrad),
      otherKradSi: otherGy.map(gyToKrad),
      totalKradSi: Array.from(curve.totalGy, (dose, i) => gyToKrad(dose + otherGy[i])),
      bandKradSi: { p05: band(5), p50: band(50), p95: band(95) },
    };
  });
  return { rows, notices };
}

/** Other sources at one depth, and the names of those that say nothing about it. */
function otherAtDepth(
  prepared: PreparedCase,
  depthMm: number,
  table: DoseDepthTable,
  index: number,
): { doseGy: number; left: string[] } {
  let doseGy = 0;
  const left: string[] = [];
  for (const source of prepared.sources) {
    const { input, spectra } = source;
    if (input.caseIds !== undefined && !input.caseIds.includes(prepared.caseId)) continue;
    if (spectra !== null) doseGy += foldDose(spectra, table.responses[index]).totalGy;
    else if (spans(source, depthMm, table)) {
      doseGy += GY_PER_KRAD * readDoseDepth(input.doseDepth!.depthsMm, input.doseDepth!.doseKradSi, depthMm);
    } else left.push(input.name);
  }
  return { doseGy, left };
}

function spans({ input }: PreparedSource, depthMm: number, table: DoseDepthTable): boolean {
  const depths = input.doseDepth?.depthsMm;
  if (depths === undefined || table.materialId !== 'Al') return false;
  return depthMm >= depths[0] && depthMm <= depths[depths.length - 1];
}
