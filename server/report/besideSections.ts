/** What stands beside the belts' dose: other sources, and what a shield lets through besides dose. */
import { three } from '../figures/index.ts';
import type { ChargingResult, ResultOtherSource } from '../margin/index.ts';
import { names } from './names.ts';
import type { Section } from './section.ts';
import { drawTable } from './table.ts';

const KIND_WORDS: Readonly<Record<ResultOtherSource['kind'], string>> = {
  dose: 'a dose, the same behind every shield',
  doseDepth: 'dose against depth in aluminium, read at the areal density of the shield',
  fluence: 'a fluence, carried through the same responses',
};

export const otherSources: Section = (flow, { result }) => {
  const n = names(result);
  flow.heading(1, 'Other sources');
  if (result.otherSources.length === 0) {
    flow.paragraph(
      'None was entered: cruise, other planets, radioisotope sources and cosmic rays are not in these doses.',
    );
    return;
  }
  drawTable(flow, {
    caption: 'Sources that are added to the belts, as entered',
    columns: [
      { header: 'Name', weight: 2 },
      { header: 'Mission phase', weight: 1.2 },
      { header: 'Given as', weight: 2 },
      { header: 'Citation or origin', weight: 3 },
    ],
    rows: result.otherSources.map(({ name, phase, kind, source, example }) => [
      name,
      phase,
      example ? `${KIND_WORDS[kind]}; example only` : KIND_WORDS[kind],
      source,
    ]),
    note: 'Entered by the user and added without spread. Source: inputs of the study.',
  });
  const rows = result.shieldDose.flatMap((row) =>
    row.bySource.map(({ name, phase, doseKradSi }) => [
      n.case(row.caseId),
      n.option(row.optionId),
      n.place(row.optionId, row.placeId),
      name,
      phase,
      three(doseKradSi),
      three(row.doseKradSi?.total),
    ]),
  );
  if (rows.length === 0) return;
  drawTable(flow, {
    caption: 'Dose of other sources at each place, krad(Si)',
    columns: [
      { header: 'Case', weight: 1.4 },
      { header: 'Option', weight: 1.4 },
      { header: 'Place', weight: 1.3 },
      { header: 'Source', weight: 2.2 },
      { header: 'Phase', weight: 1 },
      { header: 'Its dose', weight: 1, align: 'right' },
      { header: 'All, nominal', weight: 1, align: 'right' },
    ],
    size: 7.2,
    rows,
    note: 'All: nominal dose of belts and other sources together. Source: this assessment.',
  });
};

export const besideDose: Section = (flow, { result }) => {
  const n = names(result);
  flow.heading(1, 'Beside the dose');
  const where = (row: { caseId: string; optionId: string; placeId: string }) => [
    n.case(row.caseId),
    n.option(row.optionId),
    n.place(row.optionId, row.placeId),
  ];
  const place = [
    { header: 'Case', weight: 1.4 },
    { header: 'Option', weight: 1.4 },
    { header: 'Place', weight: 1.3 },
  ];
  drawTable(flow, {
    caption: 'Largest dose rate, and displacement damage in silicon',
    columns: [
      ...place,
      { header: 'Dose rate, rad(Si)/s', weight: 1.1, align: 'right' },
      { header: 'At, UTC', weight: 1.5 },
      { header: 'Electrons, MeV/g', weight: 1.1, align: 'right' },
      { header: 'Protons, MeV/g', weight: 1.1, align: 'right' },
      { header: 'All, MeV/g', weight: 1.1, align: 'right' },
      { header: '1 MeV neutrons, cm⁻²', weight: 1.2, align: 'right' },
    ],
    size: 7.2,
    rows: result.shieldDose.map((row) => [
      ...where(row),
      three(row.peakDoseRate?.radSiPerS),
      row.peakDoseRate?.utc ?? '–',
      three(row.damage?.electronMeVPerG),
      three(row.damage?.protonMeVPerG),
      three(row.damage?.totalMeVPerG),
      three(row.damage?.neutronEquivalentPerCm2),
    ]),
    note: 'Behind the shield, nominal belts and other sources given as fluence. 1 MeV neutrons: the fluence with the same damage dose in silicon. Source: this assessment; non-ionising energy loss after Summers et al. (1993), IEEE Trans. Nucl. Sci. 40, 1372, and for protons from 15 MeV Huhtinen and Aarnio (1993), Nucl. Instrum. Meth. A 335, 580; neutrons at 95 MeV mb (ASTM E722).',
  });
  const limits = result.shieldDose.find(({ charging }) => charging !== null)?.charging ?? null;
  if (limits !== null) {
    drawTable(flow, {
      caption: 'Screening for internal charging: electrons through the shield, one way',
      columns: [
        ...place,
        { header: 'Largest current, pA/cm²', weight: 1.3, align: 'right' },
        { header: 'At, UTC', weight: 1.5 },
        { header: 'Most in 10 h, cm⁻²', weight: 1.3, align: 'right' },
        { header: 'Current', weight: 1.5 },
        { header: 'Fluence', weight: 1.2 },
      ],
      size: 7.2,
      rows: result.shieldDose.map((row) => [
        ...where(row),
        three(row.charging?.peakCurrentPaPerCm2),
        row.charging?.peakUtc ?? '–',
        three(row.charging?.fluence10hPerCm2),
        row.charging === null ? '–' : CURRENT_WORDS[row.charging.currentFlag],
        row.charging === null ? '–' : FLUENCE_WORDS[row.charging.fluenceFlag],
      ]),
      note: `Against ${three(limits.currentLimitPaPerCm2)} pA/cm², ${three(limits.coldCurrentLimitPaPerCm2)} pA/cm² for cold dielectrics and ${three(limits.fluence10hLimitPerCm2)} cm⁻² in any 10 h, nominal belts; these figures are from memory of NASA-HDBK-4002A (now 4002B) and, for cold dielectrics, ECSS-E-ST-20-06C, to be confirmed there. A flag calls for an analysis; the absence of one is no certificate. Source: this assessment.`,
    });
  }
  const others = result.shieldDose.flatMap((row) =>
    row.otherTargets.map(({ targetMaterialId, doseKrad }) => [
      ...where(row),
      targetMaterialId,
      three(doseKrad.electron),
      three(doseKrad.bremsstrahlung),
      three(doseKrad.proton),
      three(doseKrad.other),
      three(doseKrad.total),
      three(row.doseKradSi?.total),
    ]),
  );
  if (others.length === 0) return;
  drawTable(flow, {
    caption: 'Nominal dose in other materials, krad of that material',
    columns: [
      ...place,
      { header: 'Target', weight: 0.8 },
      { header: 'Electrons', weight: 1, align: 'right' },
      { header: 'Photons', weight: 1, align: 'right' },
      { header: 'Protons', weight: 1, align: 'right' },
      { header: 'Other', weight: 0.9, align: 'right' },
      { header: 'All', weight: 1, align: 'right' },
      { header: 'Silicon, krad(Si)', weight: 1.1, align: 'right' },
    ],
    size: 7.2,
    rows: others,
    note: 'Other sources stand here only where they are given as a fluence; doses in silicon cannot be carried over. Source: this assessment.',
  });
};

const CURRENT_WORDS: Readonly<Record<ChargingResult['currentFlag'], string>> = {
  below: 'below',
  aboveCold: 'above for cold dielectrics',
  above: 'above',
  unknown: 'no flux history',
};

const FLUENCE_WORDS: Readonly<Record<ChargingResult['fluenceFlag'], string>> = {
  below: 'below',
  above: 'above',
  unknown: 'no flux history',
};
