/** The result itself: purpose, the one page, doses, margins, comparison, sensitivity. */
import { doseDepthScene, marginScene, massScene, percent, three } from '../figures/index.ts';
import { names } from './names.ts';
import type { Section } from './section.ts';
import { drawTable } from './table.ts';
import { CAUTIONS, VERDICT_WORDS } from './words.ts';

/** A heading and the figure under it stay on one page, points. */
const KEEP_WITH_FIGURE = 270;

export const purpose: Section = (flow, { result }) => {
  flow.heading(1, 'Purpose and caution');
  flow.paragraph(
    `This report gives the total ionising dose behind the shielding options of the study "${result.study.name}", and the design margins of its parts, for ${result.cases.length} mission cases in the trapped radiation of Uranus and Neptune.`,
  );
  flow.caution('Read before use', CAUTIONS);
};

export const summary: Section = (flow, { result }) => {
  const n = names(result);
  const { summary } = result;
  flow.newPage();
  flow.heading(1, 'Result in one page');
  const counts = summary.verdictCounts;
  flow.paragraph(
    `Of ${result.margins.length} combinations of part, case and option: ${counts.meets} meet the required margin, ${counts.needsSectorAnalysis} need sector analysis, ${counts.doesNotComply} do not comply, ${counts.notDemonstrated} are not demonstrated, ${counts.notAssessed} are not assessed. Verdicts are taken at the ${result.study.verdictPercentile}th percentile of the dose; the required margin is ${three(result.study.requiredRdm)} unless a part has its own (a project input, not a standard's number).`,
  );
  const low = summary.lowestMargin;
  if (low !== null) {
    flow.paragraph(
      `Lowest margin: ${n.part(low.partId)} in ${n.case(low.caseId)} with ${n.option(low.optionId)}: ${three(low.achievedRdmAtVerdict)} against ${three(low.requiredRdm)} required (${VERDICT_WORDS[low.verdict]}). ${percent(low.extrapolatedFraction)} of this dose comes from where nothing was measured.${low.worstPhaseOffsetDeg === null ? '' : ` Worst rotation phase: ${three(low.worstPhaseOffsetDeg)}° from the model.`}${low.dominantUncertainty === null ? '' : ` Dominant uncertainty: ${sourceWords(low.dominantUncertainty.source)} (${percent(low.dominantUncertainty.share)} of the variance of the logarithm of the dose).`}`,
    );
  }
  drawTable(flow, {
    caption: 'Verdicts by option',
    columns: [
      { header: 'Option', weight: 3 },
      { header: 'Mass, kg', weight: 1.2, align: 'right' },
      { header: 'Meets', weight: 1, align: 'right' },
      { header: 'Needs sector analysis', weight: 1.3, align: 'right' },
      { header: 'Does not comply', weight: 1.2, align: 'right' },
      { header: 'Not demonstrated', weight: 1.4, align: 'right' },
      { header: 'Not assessed', weight: 1.2, align: 'right' },
      { header: 'Lowest margin', weight: 1.2, align: 'right' },
    ],
    rows: summary.byOption.map((row) => [
      n.option(row.optionId),
      three(result.options.find((option) => option.optionId === row.optionId)?.massKg),
      String(row.verdictCounts.meets),
      String(row.verdictCounts.needsSectorAnalysis),
      String(row.verdictCounts.doesNotComply),
      String(row.verdictCounts.notDemonstrated),
      String(row.verdictCounts.notAssessed),
      three(row.lowestMargin?.achievedRdmAtVerdict),
    ]),
    note: 'Margin: capability over dose at the verdict percentile. Source: this assessment.',
  });
  if (summary.whatWouldChange.length > 0) {
    flow.heading(2, 'What would change the lowest verdict');
    flow.bullets(summary.whatWouldChange);
  }
  flow.heading(2, 'Decision asked');
  const lightest = summary.lightestMeetingOptionId;
  flow.paragraph(
    lightest === null
      ? 'No option meets every requirement in every case. The review is asked which parts go to sector analysis, spot shielding, another capability test or replacement, and for which cases.'
      : `The lightest option that meets every requirement in every case is "${n.option(lightest)}". The review is asked to confirm it, or to name what must be shown first.`,
  );
};

export const doseDepth: Section = (flow, { result }) => {
  const n = names(result);
  flow.heading(1, 'Dose against depth in aluminium', KEEP_WITH_FIGURE);
  for (const caseId of new Set(result.doseDepth.map((row) => row.caseId))) {
    const rows = result.doseDepth.filter((row) => row.caseId === caseId);
    flow.figures(
      rows.map((row) => ({
        scene: doseDepthScene(row, n.case(caseId), [], { widthPx: 400, heightPx: 310 }),
        caption: `Dose behind aluminium, ${n.case(caseId)}: ${row.targetText}. Band: 5 to 95 %. Source: this assessment.`,
      })),
    );
  }
};

export const doses: Section = (flow, { result }) => {
  const n = names(result);
  flow.heading(1, 'Doses');
  drawTable(flow, {
    caption: 'Dose at each place, krad(Si)',
    columns: [
      { header: 'Case', weight: 1.45 },
      { header: 'Option', weight: 1.65 },
      { header: 'Place', weight: 1.45 },
      { header: 'Nominal', weight: 1.3, align: 'right' },
      { header: '5 %', weight: 1.3, align: 'right' },
      { header: '50 %', weight: 1.3, align: 'right' },
      { header: '95 %', weight: 1.3, align: 'right' },
      { header: 'Electrons', weight: 1.25, align: 'right' },
      { header: 'Photons', weight: 1.15, align: 'right' },
      { header: 'Protons', weight: 1.1, align: 'right' },
      { header: 'Other', weight: 1, align: 'right' },
      { header: 'Not measured', weight: 1.3, align: 'right' },
    ],
    size: 7.2,
    rows: result.shieldDose.map((row) => {
      const dose = row.doseKradSi;
      const share = (part: number) => (dose === null || dose.total === 0 ? '–' : percent(part / dose.total));
      return [
        n.case(row.caseId),
        n.option(row.optionId),
        n.place(row.optionId, row.placeId),
        three(dose?.total),
        three(row.band?.p05),
        three(row.band?.p50),
        three(row.band?.p95),
        dose === null ? '–' : share(dose.electron),
        dose === null ? '–' : share(dose.bremsstrahlung),
        dose === null ? '–' : share(dose.proton),
        dose === null ? '–' : share(dose.other),
        percent(row.extrapolatedFraction),
      ];
    }),
    note: 'Shares of the nominal dose; photons are the bremsstrahlung of the electrons, other the sources that were entered. Not measured: share of the belt dose from where nothing was measured. The dose carries no margin. Source: this assessment.',
  });
};

export const margins: Section = (flow, { result }) => {
  const n = names(result);
  flow.heading(1, 'Design margins', KEEP_WITH_FIGURE);
  const low = [...result.margins]
    .filter((row) => row.achievedRdmAtVerdict !== null)
    .sort((a, b) => a.achievedRdmAtVerdict! / a.requiredRdm - b.achievedRdmAtVerdict! / b.requiredRdm);
  if (low.length > 0) {
    flow.figure(
      marginScene(
        low
          .slice(0, 12)
          .map((row) => ({ label: `${n.part(row.partId)} · ${n.case(row.caseId)} · ${n.option(row.optionId)}`, row })),
      ),
      'The twelve lowest margins against what is required: bar from the margin at the 95th to that at the 50th percentile of the dose. Source: this assessment.',
    );
  }
  flow.caution('Where the numbers are', [CAUTIONS[0], CAUTIONS[3]]);
  for (const option of result.options) {
    drawTable(flow, {
      caption: `Margins with ${option.name}`,
      columns: [
        { header: 'Part', weight: 1.7 },
        { header: 'Case', weight: 1.7 },
        { header: 'Capability, krad(Si)', weight: 1.35, align: 'right' },
        { header: 'Dose 50 %, krad(Si)', weight: 1.35, align: 'right' },
        { header: 'Dose 95 %, krad(Si)', weight: 1.35, align: 'right' },
        { header: 'Required', weight: 1.15, align: 'right' },
        { header: 'Achieved 50 %', weight: 1.2, align: 'right' },
        { header: 'Achieved 95 %', weight: 1.2, align: 'right' },
        { header: 'P(margin met)', weight: 1.3, align: 'right' },
        { header: 'Verdict', weight: 1.6 },
      ],
      size: 7.2,
      rows: result.margins
        .filter((row) => row.optionId === option.optionId)
        .map((row) => [
          n.part(row.partId),
          n.case(row.caseId),
          three(row.capabilityKradSi),
          three(row.doseKradSi),
          three(row.doseP95KradSi),
          three(row.requiredRdm),
          three(row.achievedRdm),
          three(row.achievedRdmP95),
          percent(row.confidence),
          VERDICT_WORDS[row.verdict],
        ]),
      note: 'Achieved: capability over dose. P(margin met): probability that the capability exceeds the required margin times the dose, the lot drawn. Source: this assessment; capabilities as entered.',
    });
  }
};

export const comparison: Section = (flow, { result }) => {
  const n = names(result);
  flow.heading(1, 'Comparison of options', KEEP_WITH_FIGURE);
  const [first] = result.comparison;
  if (first !== undefined) {
    const rows = result.comparison.filter((row) => row.caseId === first.caseId && row.placeId === first.placeId);
    if (rows.some((row) => row.massKg !== null)) {
      flow.figure(
        massScene(
          rows.map((row) => ({ label: n.option(row.optionId), row })),
          `${n.case(first.caseId)}`,
        ),
        `Median dose against mass, ${n.case(first.caseId)}, ${n.place(first.optionId, first.placeId)}; filled marks are options that none beats in both. Source: this assessment.`,
        400,
      );
    }
  }
  drawTable(flow, {
    caption: 'Options side by side',
    columns: [
      { header: 'Case', weight: 2 },
      { header: 'Place', weight: 1.7 },
      { header: 'Option', weight: 2 },
      { header: 'Mass, kg', weight: 1, align: 'right' },
      { header: 'Median dose, krad(Si)', weight: 1.3, align: 'right' },
      { header: 'Dose to baseline', weight: 1.1, align: 'right' },
      { header: 'Not beaten', weight: 0.9 },
      { header: 'Lowest margin', weight: 1.1, align: 'right' },
    ],
    size: 7.2,
    rows: result.comparison.map((row) => [
      n.case(row.caseId),
      n.place(row.optionId, row.placeId),
      n.option(row.optionId),
      three(row.massKg),
      three(row.doseKradSi?.p50),
      row.toBaseline === null ? 'baseline' : `× ${three(row.toBaseline.doseRatio)}`,
      row.nonDominated === null ? '–' : row.nonDominated ? 'yes' : 'no',
      three(row.lowestMargin?.achievedRdmAtVerdict),
    ]),
    note: 'Not beaten: no other option has both at most this mass and at most this median dose here. Source: this assessment.',
  });
};

export const sensitivity: Section = (flow, { result }) => {
  const n = names(result);
  flow.heading(1, 'Sensitivity');
  drawTable(flow, {
    caption: 'How the nominal dose moves, krad(Si)',
    columns: [
      { header: 'Case', weight: 1.5 },
      { header: 'Option', weight: 1.7 },
      { header: 'Place', weight: 1.45 },
      { header: 'Layers −10 %', weight: 1.3, align: 'right' },
      { header: 'Layers +10 %', weight: 1.3, align: 'right' },
      { header: 'Lowest phase', weight: 1.3, align: 'right' },
      { header: 'Highest phase', weight: 1.3, align: 'right' },
      { header: 'Belts halved', weight: 1.3, align: 'right' },
      { header: 'Belts doubled', weight: 1.3, align: 'right' },
      { header: 'Belt factor at requirement', weight: 1.5, align: 'right' },
    ],
    size: 7.2,
    rows: result.sensitivity.map((row) => [
      n.case(row.caseId),
      n.option(row.optionId),
      n.place(row.optionId, row.placeId),
      three(row.thinner10Pct?.doseKradSi),
      three(row.thicker10Pct?.doseKradSi),
      three(row.phase?.lowestKradSi),
      three(row.phase?.highestKradSi),
      three(row.beltsHalvedKradSi),
      three(row.beltsDoubledKradSi),
      row.beltFactorAtRequirement === null ? '–' : three(row.beltFactorAtRequirement.factor),
    ]),
    note: 'Belt factor at requirement: by how much the belts may be multiplied before the least margin here just meets its requirement. Source: this assessment.',
  });
};

function sourceWords(source: string): string {
  const words: Readonly<Record<string, string>> = {
    electronBelt: 'intensity of the electron belts',
    protonBelt: 'intensity of the proton belts',
    timeVariation: 'variation in time',
    rotationPhase: 'rotation phase',
    fieldModel: 'field model',
    statisticalError: 'statistical error of the transport',
  };
  return words[source] ?? source;
}
