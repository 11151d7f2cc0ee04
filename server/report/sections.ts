import { doseDepthScene, marginScene, massScene, percent, phaseScene, three } from '../figures/index.ts';
import type { AssessmentResult, ShieldDoseRow } from '../margin/index.ts';
import type { PageFlow } from './pageFlow.ts';
import { drawTable } from './table.ts';
import type { ReportInput } from './types.ts';
import { CAUTIONS, VERDICT_WORDS } from './words.ts';

export type Section = (flow: PageFlow, input: ReportInput) => void;

function names(result: AssessmentResult) {
  const lookup = (rows: readonly object[], key: string) => {
    const map = new Map(rows.map((row) => [(row as Record<string, string>)[key], (row as { name: string }).name]));
    return (id: string) => map.get(id) ?? id;
  };
  const placeNames = new Map(
    result.options.flatMap((option) =>
      option.places.map((place) => [`${option.optionId}/${place.placeId}`, place.name]),
    ),
  );
  return {
    case: lookup(result.cases, 'caseId'),
    option: lookup(result.options, 'optionId'),
    part: lookup(result.parts, 'partId'),
    trajectory: lookup(result.trajectories, 'trajectoryId'),
    place: (optionId: string, placeId: string) => placeNames.get(`${optionId}/${placeId}`) ?? placeId,
  };
}

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

export const assumptions: Section = (flow, { result }) => {
  flow.heading(1, 'Assumptions and open points');
  flow.bullets([
    'The flux is taken isotropic at the shield; an oriented one-sided shield can see up to twice as much.',
    'Nominal doses use median belts and the nominal rotation phase; bands come from drawing belts, rotation phase, field model and statistical error together. The lot of a part is drawn from its predictive distribution.',
    'Each place is shielded by the stack named for it, on all sides that matter, with nothing else in the way.',
    ...new Set(result.notices.map((notice) => notice.text)),
  ]);
};

export const trajectories: Section = (flow, { trajectories }) => {
  flow.heading(1, 'Trajectories');
  for (const { name, sha256, summary } of trajectories) {
    flow.heading(2, name);
    if (summary === null) {
      flow.paragraph(`The trajectory was deleted after the assessment; its bytes had SHA-256 ${sha256}.`);
      continue;
    }
    flow.bullets([...summary.reading, `SHA-256 of the file: ${sha256}`]);
  }
};

export const environment: Section = (flow, { environments, result }) => {
  const n = names(result);
  flow.heading(1, 'Environment model, heritage and validity');
  const seen = new Set<string>();
  for (const entry of environments) {
    for (const model of [entry.field, entry.belts]) {
      if (model === null || seen.has(model.id)) continue;
      seen.add(model.id);
      flow.paragraph(`${model.label} (${model.id}). ${model.source}`);
    }
  }
  drawTable(flow, {
    caption: 'Nominal fluence of one pass, electrons, omnidirectional',
    columns: [
      { header: 'Trajectory', weight: 3 },
      { header: 'Above, MeV', weight: 1, align: 'right' },
      { header: 'Nominal, cm⁻²', weight: 1.4, align: 'right' },
      { header: '5 %, cm⁻²', weight: 1.4, align: 'right' },
      { header: '50 %, cm⁻²', weight: 1.4, align: 'right' },
      { header: '95 %, cm⁻²', weight: 1.4, align: 'right' },
      { header: 'Extrapolated above 1 MeV', weight: 1.4, align: 'right' },
    ],
    rows: result.fluence
      .filter((row) => row.species === 'electron')
      .flatMap((row) =>
        row.bands.map((band) => [
          n.trajectory(row.trajectoryId),
          three(band.thresholdMeV),
          three(band.nominalPerCm2),
          three(band.bandPerCm2.p05),
          three(band.bandPerCm2.p50),
          three(band.bandPerCm2.p95),
          percent(row.byEvidence.extrapolated),
        ]),
      ),
    note: 'Bands: drawn belts, phase and field model. The extrapolated share says how much comes from where nothing was measured. Source: this assessment.',
  });
};

export const phase: Section = (flow, input) => {
  const n = names(input.result);
  flow.heading(1, 'Rotation phase');
  const seen = new Set<string>();
  for (const { rotation, phaseMode } of input.environments) {
    if (rotation === null || seen.has(rotation.id)) continue;
    seen.add(rotation.id);
    flow.paragraph(
      `${rotation.label}: period ${rotation.periodH.toFixed(6)} h ± ${three(rotation.periodErrorH)} h, so the magnetic longitude loses ${three(rotation.sigmaDegPerYear)}° (1 σ) a year from the encounter that fixed it. Treatment here: ${phaseMode}. ${rotation.source}`,
    );
  }
  const row = drivingDose(input.result);
  if (row !== null && row.byPhase.length > 2) {
    flow.figure(
      phaseScene(row, `${n.case(row.caseId)}, ${n.option(row.optionId)}`),
      `Nominal belt dose against the rotation offset, ${n.case(row.caseId)}, ${n.option(row.optionId)}, ${n.place(row.optionId, row.placeId)}. Source: this assessment.`,
    );
  }
};

export const shielding: Section = (flow, { result }) => {
  flow.heading(1, 'Shielding geometry and materials');
  drawTable(flow, {
    caption: 'Options and their places',
    columns: [
      { header: 'Option', weight: 1.6 },
      { header: 'Place', weight: 1.5 },
      { header: 'Shield, outside first', weight: 4.5 },
      { header: 'Mass, kg', weight: 0.9, align: 'right' },
    ],
    rows: result.options.flatMap((option) =>
      option.places.map((place) => [option.name, place.name, place.shieldText, three(place.massKg)]),
    ),
    note: 'Mass over the area given for each place. Thickness in mm, mil and g/cm². Source: inputs of the study.',
  });
};

export const method: Section = (flow, { result }) => {
  flow.heading(1, 'Method and numerical error');
  const descriptions = new Set(
    result.options.flatMap((option) =>
      option.places.flatMap((place) => (place.response === null ? [] : [place.response.description])),
    ),
  );
  flow.paragraph(
    'The flux along each path is integrated over the belts in magnetic coordinates traced in the multipole field, with the step set by the flux itself. Dose is the product of that fluence with the response of each shield, found by transporting electrons, their bremsstrahlung and protons through its layers as built; no equivalent thickness is used.',
  );
  flow.bullets([...descriptions]);
  const worst = Math.max(0, ...result.shieldDose.map((row) => row.statisticalErrorRel ?? 0));
  flow.paragraph(`Largest statistical error (1 σ) of a nominal dose here: ${percent(worst)}.`);
};

export const doseDepth: Section = (flow, { result }) => {
  const n = names(result);
  flow.heading(1, 'Dose against depth in aluminium');
  for (const row of result.doseDepth) {
    flow.figure(
      doseDepthScene(row, n.case(row.caseId)),
      `Dose behind aluminium, ${n.case(row.caseId)}: ${row.targetText}. Band: 5 to 95 %. Source: this assessment.`,
      400,
    );
  }
};

export const doses: Section = (flow, { result }) => {
  const n = names(result);
  flow.heading(1, 'Doses');
  drawTable(flow, {
    caption: 'Dose at each place, krad(Si)',
    columns: [
      { header: 'Case', weight: 1.8 },
      { header: 'Option', weight: 1.8 },
      { header: 'Place', weight: 1.6 },
      { header: 'Nominal', weight: 1, align: 'right' },
      { header: '5 %', weight: 1, align: 'right' },
      { header: '50 %', weight: 1, align: 'right' },
      { header: '95 %', weight: 1, align: 'right' },
      { header: 'Electrons', weight: 1.15, align: 'right' },
      { header: 'Photons', weight: 1, align: 'right' },
      { header: 'Protons', weight: 1.05, align: 'right' },
      { header: 'Not measured', weight: 1.15, align: 'right' },
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
        percent(row.extrapolatedFraction),
      ];
    }),
    note: 'Shares of the nominal dose; photons are the bremsstrahlung of the electrons. Not measured: share of the belt dose from where nothing was measured. The dose carries no margin. Source: this assessment.',
  });
};

export const margins: Section = (flow, { result }) => {
  const n = names(result);
  flow.heading(1, 'Design margins');
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
        { header: 'Part', weight: 1.9 },
        { header: 'Case', weight: 1.9 },
        { header: 'Capability, krad(Si)', weight: 1.35, align: 'right' },
        { header: 'Dose 50 %, krad(Si)', weight: 1.2, align: 'right' },
        { header: 'Dose 95 %, krad(Si)', weight: 1.2, align: 'right' },
        { header: 'Required', weight: 1.15, align: 'right' },
        { header: 'Achieved 50 %', weight: 1.2, align: 'right' },
        { header: 'Achieved 95 %', weight: 1.2, align: 'right' },
        { header: 'P(margin met)', weight: 1, align: 'right' },
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
  flow.heading(1, 'Comparison of options');
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
      { header: 'Case', weight: 2 },
      { header: 'Option', weight: 2 },
      { header: 'Place', weight: 1.7 },
      { header: 'Lowest phase', weight: 1.1, align: 'right' },
      { header: 'Highest phase', weight: 1.1, align: 'right' },
      { header: 'Belts halved', weight: 1.1, align: 'right' },
      { header: 'Belts doubled', weight: 1.1, align: 'right' },
      { header: 'Belt factor at requirement', weight: 1.3, align: 'right' },
    ],
    size: 7.2,
    rows: result.sensitivity.map((row) => [
      n.case(row.caseId),
      n.option(row.optionId),
      n.place(row.optionId, row.placeId),
      three(row.phase?.lowestKradSi),
      three(row.phase?.highestKradSi),
      three(row.beltsHalvedKradSi),
      three(row.beltsDoubledKradSi),
      row.beltFactorAtRequirement === null ? '–' : three(row.beltFactorAtRequirement.factor),
    ]),
    note: 'Belt factor at requirement: by how much the belts may be multiplied before the least margin here just meets its requirement. Source: this assessment.',
  });
};

export const exclusions: Section = (flow) => {
  flow.heading(1, 'Exclusions');
  flow.bullets([
    'Single-event effects of any kind.',
    'Dose-rate and ageing effects in parts; enhanced low-dose-rate sensitivity is for the part test to show.',
    'Surface charging; internal charging is screened where a flux history exists and flagged, never certified.',
    'Neutrons, and secondary particles of nuclear reactions in the shield.',
    'Every phase of the mission that is not entered: cruise solar protons, other planets, radioisotope sources, cosmic rays.',
  ]);
};

export const cautions: Section = (flow) => {
  flow.heading(1, 'Caution notes');
  flow.caution('These notes belong to every number of this report', CAUTIONS);
};

export const changes: Section = (flow, { previous }) => {
  flow.heading(1, 'Change against the previous issue');
  if (previous === null) {
    flow.paragraph('This is the first issue that names no earlier one.');
    return;
  }
  const { comparison } = previous;
  flow.paragraph(
    `Compared with ${previous.documentNumber}, issue ${previous.issue}: ${comparison.inputs.length} inputs and ${comparison.settings.length} settings differ, ${comparison.doses.length} doses were compared, ${comparison.verdicts.length} verdicts changed.`,
  );
};

export const inputs: Section = (flow, { result }) => {
  flow.heading(1, 'Inputs and their hashes');
  const { provenance } = result;
  flow.paragraph(
    `Engine ${provenance.engineVersion}, Node ${provenance.nodeVersion} on ${provenance.architecture}; ${provenance.draws} draws, seed ${provenance.seed}. SHA-256 over all inputs: ${provenance.inputsSha256}. SHA-256 of the result (RFC 8785): ${provenance.resultSha256}.`,
  );
  drawTable(flow, {
    caption: 'Inputs',
    columns: [
      { header: 'Kind', weight: 1 },
      { header: 'Name', weight: 2.4 },
      { header: 'SHA-256', weight: 4.6, font: 'mono' },
    ],
    size: 6.6,
    rows: provenance.inputs.map((row) => [row.kind, row.name, row.sha256]),
  });
};

export const evidence: Section = (flow, input) => {
  flow.heading(1, 'Evidence: checks against outside numbers');
  drawTable(flow, {
    caption: 'What the engine gives beside what others published',
    columns: [
      { header: 'Room', weight: 0.9 },
      { header: 'What', weight: 2.6 },
      { header: 'Ours', weight: 1.3 },
      { header: 'Published', weight: 1.3 },
      { header: 'Tolerance', weight: 1.1 },
      { header: 'Source', weight: 2.8 },
    ],
    size: 7,
    rows: input.evidence.map((row) => [row.room, row.what, row.ours, row.published, row.tolerance, row.source]),
    note: 'Regenerated by the tests of the service; a stale row fails them.',
  });
};

function drivingDose(result: AssessmentResult): ShieldDoseRow | null {
  const low = result.summary.lowestMargin;
  const match = result.shieldDose.find(
    (row) => low !== null && row.caseId === low.caseId && row.optionId === low.optionId && row.placeId === low.placeId,
  );
  return match ?? result.shieldDose.find((row) => row.byPhase.length > 2) ?? null;
}

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

/** In the order a review reads them. */
export const SECTIONS: readonly Section[] = [
  purpose,
  summary,
  assumptions,
  trajectories,
  environment,
  phase,
  shielding,
  method,
  doseDepth,
  doses,
  margins,
  comparison,
  sensitivity,
  exclusions,
  cautions,
  changes,
  inputs,
  evidence,
];
