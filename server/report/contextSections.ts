/** What a result rests on: assumptions, paths, environment, shields, method, exclusions, inputs, evidence. */
import { percent, phaseScene, three } from '../figures/index.ts';
import type { AssessmentResult, ShieldDoseRow } from '../margin/index.ts';
import { names } from './names.ts';
import type { Section } from './section.ts';
import { drawTable } from './table.ts';
import { CAUTIONS } from './words.ts';

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
