import type { AssessmentResult } from '../margin/index.ts';

/**
 * One row per part × case × option, with the dose at its place: the numbers of the JSON result, unrounded, units in the
 * column names; columns without one are names, ratios, shares and probabilities. The last columns are those of the other
 * sources, one each. Cells that a spreadsheet would take for a formula are quoted with a leading apostrophe.
 */
export function resultCsv(result: AssessmentResult): string {
  const targets = [
    ...new Set(result.shieldDose.flatMap((row) => row.otherTargets.map(({ targetMaterialId }) => targetMaterialId))),
  ];
  const header = [
    'case',
    'option',
    'place',
    'shield',
    'mass_kg',
    'part',
    'capability_kradSi',
    'doseNominal_kradSi',
    'electron_kradSi',
    'bremsstrahlung_kradSi',
    'proton_kradSi',
    'other_kradSi',
    'doseP05_kradSi',
    'doseP50_kradSi',
    'doseP95_kradSi',
    'statisticalError_rel',
    'extrapolatedShare',
    'doseLayersThinner10Pct_kradSi',
    'doseLayersThicker10Pct_kradSi',
    'requiredRdm',
    'achievedRdmP50',
    'achievedRdmP95',
    'probabilityAboveDose',
    'probabilityAboveRequired',
    'verdict',
    'reason',
    'peakDoseRate_radSiPerS',
    'peakDoseRate_utc',
    'damageElectron_MeVPerG',
    'damageProton_MeVPerG',
    'damageTotal_MeVPerG',
    'neutron1MeVEquivalent_perCm2',
    'electronCurrentPeak_pAPerCm2',
    'electronCurrentPeak_utc',
    'electronFluence10h_perCm2',
    'electronCurrentFlag',
    'electronFluenceFlag',
    ...targets.map((target) => `doseNominal${target}_krad${target}`),
    ...result.otherSources.map(({ name, phase }) => `otherSource ${name} (${phase})_kradSi`),
  ];
  const nameOf = (rows: readonly { readonly name: string }[], key: string, id: string) =>
    rows.find((row) => (row as unknown as Record<string, unknown>)[key] === id)?.name ?? id;
  const rows = result.margins.map((margin) => {
    const here = (row: { caseId: string; optionId: string; placeId: string }) =>
      row.caseId === margin.caseId && row.optionId === margin.optionId && row.placeId === margin.placeId;
    const dose = result.shieldDose.find(here);
    const moved = result.sensitivity.find(here);
    const option = result.options.find((entry) => entry.optionId === margin.optionId);
    const place = option?.places.find((entry) => entry.placeId === margin.placeId);
    return [
      nameOf(result.cases, 'caseId', margin.caseId),
      option?.name ?? margin.optionId,
      place?.name ?? margin.placeId,
      place?.shieldText ?? '',
      place?.massKg ?? null,
      nameOf(result.parts, 'partId', margin.partId),
      margin.capabilityKradSi,
      dose?.doseKradSi?.total ?? null,
      dose?.doseKradSi?.electron ?? null,
      dose?.doseKradSi?.bremsstrahlung ?? null,
      dose?.doseKradSi?.proton ?? null,
      dose?.doseKradSi?.other ?? null,
      dose?.band?.p05 ?? null,
      dose?.band?.p50 ?? null,
      dose?.band?.p95 ?? null,
      dose?.statisticalErrorRel ?? null,
      dose?.extrapolatedFraction ?? null,
      moved?.thinner10Pct?.doseKradSi ?? null,
      moved?.thicker10Pct?.doseKradSi ?? null,
      margin.requiredRdm,
      margin.achievedRdm,
      margin.achievedRdmP95,
      margin.probabilityAboveDose,
      margin.confidence,
      margin.verdict,
      margin.reason,
      dose?.peakDoseRate?.radSiPerS ?? null,
      dose?.peakDoseRate?.utc ?? null,
      dose?.damage?.electronMeVPerG ?? null,
      dose?.damage?.protonMeVPerG ?? null,
      dose?.damage?.totalMeVPerG ?? null,
      dose?.damage?.neutronEquivalentPerCm2 ?? null,
      dose?.charging?.peakCurrentPaPerCm2 ?? null,
      dose?.charging?.peakUtc ?? null,
      dose?.charging?.fluence10hPerCm2 ?? null,
      dose?.charging?.currentFlag ?? null,
      dose?.charging?.fluenceFlag ?? null,
      ...targets.map(
        (target) => dose?.otherTargets.find((row) => row.targetMaterialId === target)?.doseKrad.total ?? null,
      ),
      ...result.otherSources.map(
        ({ name, phase }) => dose?.bySource.find((row) => row.name === name && row.phase === phase)?.doseKradSi ?? null,
      ),
    ];
  });
  return `${[header, ...rows].map((row) => row.map(cell).join(',')).join('\r\n')}\r\n`;
}

function cell(value: string | number | null): string {
  if (value === null) return '';
  if (typeof value === 'number') return String(value);
  const safe = /^[=+\-@\t\r]/.test(value) ? `'${value}` : value;
  return /[",\r\n]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe;
}
