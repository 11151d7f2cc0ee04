import { three } from '../../server/figures/index.ts';
import type { AssessmentResult, ChargingResult } from '../../server/margin/result.ts';

/** Beside the dose of the belts: other sources, dose rate, displacement damage, charging, other materials. */
export function BesideDose({ result, caseId }: { result: AssessmentResult; caseId: string }) {
  const rows = result.shieldDose.filter((row) => row.caseId === caseId && row.notAssessed === null);
  const option = (optionId: string) => result.options.find((entry) => entry.optionId === optionId);
  const where = (row: { optionId: string; placeId: string }) =>
    `${option(row.optionId)?.name ?? row.optionId}, ${
      option(row.optionId)?.places.find((place) => place.placeId === row.placeId)?.name ?? row.placeId
    }`;
  const limits = rows.find((row) => row.charging !== null)?.charging ?? null;
  const sources = rows.flatMap((row) => row.bySource.map((source) => ({ row, source })));
  const others = rows.flatMap((row) => row.otherTargets.map((target) => ({ row, target })));
  if (rows.length === 0) return null;
  return (
    <>
      <h2>Beside the dose</h2>
      {result.otherSources.length > 0 && (
        <table>
          <caption>Other sources, as entered</caption>
          <thead>
            <tr>
              <th>Source</th>
              <th>Phase</th>
              <th>Citation or origin</th>
              <th>Behind</th>
              <th class="num">Dose, krad(Si)</th>
            </tr>
          </thead>
          <tbody>
            {sources.map(({ row, source }) => {
              const entered = result.otherSources.find((one) => one.name === source.name && one.phase === source.phase);
              return (
                <tr key={`${row.optionId}/${row.placeId}/${source.name}/${source.phase}`}>
                  <td>{source.name}</td>
                  <td>{source.phase}</td>
                  <td class="small">{entered?.source}</td>
                  <td>{where(row)}</td>
                  <td class="num">{three(source.doseKradSi)}</td>
                </tr>
              );
            })}
          </tbody>
        </table>
      )}
      <table>
        <caption>Nominal belts, behind each shield</caption>
        <thead>
          <tr>
            <th>Behind</th>
            <th class="num">Largest dose rate, rad(Si)/s</th>
            <th class="num">Displacement damage in Si, MeV/g</th>
            <th class="num">Same damage in 1 MeV neutrons, cm⁻²</th>
            <th class="num">Largest electron current, pA/cm²</th>
            <th class="num">Electrons in any 10 h, cm⁻²</th>
            <th>Charging guideline</th>
          </tr>
        </thead>
        <tbody>
          {rows.map((row) => (
            <tr key={`${row.optionId}/${row.placeId}`}>
              <td>{where(row)}</td>
              <td class="num">{three(row.peakDoseRate?.radSiPerS)}</td>
              <td class="num">{three(row.damage?.totalMeVPerG)}</td>
              <td class="num">{three(row.damage?.neutronEquivalentPerCm2)}</td>
              <td class="num">{three(row.charging?.peakCurrentPaPerCm2)}</td>
              <td class="num">{three(row.charging?.fluence10hPerCm2)}</td>
              <td>{row.charging === null ? '–' : chargingWords(row.charging)}</td>
            </tr>
          ))}
        </tbody>
      </table>
      {limits !== null && (
        <p class="small">
          Screened against {three(limits.currentLimitPaPerCm2)} pA/cm², {three(limits.coldCurrentLimitPaPerCm2)} pA/cm²
          for cold dielectrics, and {three(limits.fluence10hLimitPerCm2)} cm⁻² in any 10 h; figures from memory of
          NASA-HDBK-4002A (now 4002B) and, for cold dielectrics, ECSS-E-ST-20-06C, to be confirmed there. A flag calls
          for an analysis; the absence of one is no certificate.
        </p>
      )}
      {others.length > 0 && (
        <table>
          <caption>Nominal dose in other materials</caption>
          <thead>
            <tr>
              <th>Behind</th>
              <th>Material</th>
              <th class="num">Dose, krad of that material</th>
              <th class="num">In silicon, krad(Si)</th>
            </tr>
          </thead>
          <tbody>
            {others.map(({ row, target }) => (
              <tr key={`${row.optionId}/${row.placeId}/${target.targetMaterialId}`}>
                <td>{where(row)}</td>
                <td>{target.targetMaterialId}</td>
                <td class="num">{three(target.doseKrad.total)}</td>
                <td class="num">{three(row.doseKradSi?.total)}</td>
              </tr>
            ))}
          </tbody>
        </table>
      )}
    </>
  );
}

function chargingWords({ currentFlag, fluenceFlag }: ChargingResult): string {
  if (currentFlag === 'unknown') return 'no flux history';
  if (currentFlag === 'above' || fluenceFlag === 'above') return '△ above';
  return currentFlag === 'aboveCold' ? '△ above for cold dielectrics' : '● below';
}
