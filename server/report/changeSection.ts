/** What changed against the previous issue: inputs, the doses that moved most, and verdicts. */
import { three } from '../figures/index.ts';
import type { Section } from './section.ts';
import { drawTable } from './table.ts';
import { VERDICT_WORDS } from './words.ts';

const LARGEST_MOVES = 20;

const INPUT_KINDS: Readonly<Record<string, string>> = {
  otherSource: 'other source',
  doseDepthTable: 'dose-depth table',
  partPlace: 'place of part',
};

export const changes: Section = (flow, { previous }) => {
  flow.heading(1, 'Change against the previous issue');
  if (previous === null) {
    flow.paragraph('This is the first issue that names no earlier one.');
    return;
  }
  const { comparison } = previous;
  if (comparison.sameResult) {
    flow.paragraph(
      `Compared with ${previous.documentNumber}, issue ${previous.issue}: the result is the same to the last digit.`,
    );
    return;
  }
  flow.paragraph(
    `Compared with ${previous.documentNumber}, issue ${previous.issue}: ${comparison.inputs.length} inputs and ${comparison.settings.length} settings differ, ${comparison.doses.length} doses were compared, ${comparison.verdicts.length} verdicts changed.`,
  );
  const changed = [
    ...comparison.inputs.map(({ kind, name, change }) => `${inputKind(kind)} "${name}" ${change}`),
    ...comparison.settings.map(({ setting, before, after }) => `${setting}: ${before} before, ${after} now`),
    ...comparison.onlyBefore.map((row) => `${row}: no longer there`),
    ...comparison.onlyAfter.map((row) => `${row}: new`),
  ];
  if (changed.length > 0) flow.bullets(shortened(changed));
  const moves = comparison.doses
    .filter(({ ratio }) => ratio !== null && ratio > 0 && ratio !== 1)
    .sort((a, b) => Math.abs(Math.log(b.ratio!)) - Math.abs(Math.log(a.ratio!)))
    .slice(0, LARGEST_MOVES);
  if (moves.length > 0) {
    drawTable(flow, {
      caption: `Largest moves of dose, at most ${LARGEST_MOVES}`,
      columns: [
        { header: 'Case', weight: 1.6 },
        { header: 'Option', weight: 1.6 },
        { header: 'Place', weight: 1.2 },
        { header: 'Before, krad(Si)', weight: 1, align: 'right' },
        { header: 'Now, krad(Si)', weight: 1, align: 'right' },
        { header: 'Now / before', weight: 0.9, align: 'right' },
        { header: '95 % before, krad(Si)', weight: 1.1, align: 'right' },
        { header: '95 % now, krad(Si)', weight: 1.1, align: 'right' },
      ],
      rows: moves.map((row) => [
        row.caseName,
        row.optionName,
        row.placeName,
        three(row.nominalBeforeKradSi),
        three(row.nominalAfterKradSi),
        three(row.ratio),
        three(row.p95BeforeKradSi),
        three(row.p95AfterKradSi),
      ]),
      note: 'Nominal doses of both issues at the same case, option and place, by name. Source: the results of both.',
    });
  }
  if (comparison.verdicts.length > 0) {
    drawTable(flow, {
      caption: `Verdicts that changed, at most ${LARGEST_MOVES} shown of ${comparison.verdicts.length}`,
      columns: [
        { header: 'Part', weight: 1.4 },
        { header: 'Case', weight: 1.4 },
        { header: 'Option', weight: 1.4 },
        { header: 'Margin before', weight: 0.9, align: 'right' },
        { header: 'Margin now', weight: 0.9, align: 'right' },
        { header: 'Verdict before', weight: 1.2 },
        { header: 'Verdict now', weight: 1.2 },
      ],
      rows: comparison.verdicts
        .slice(0, LARGEST_MOVES)
        .map((row) => [
          row.partName,
          row.caseName,
          row.optionName,
          three(row.achievedRdmBefore),
          three(row.achievedRdmAfter),
          VERDICT_WORDS[row.verdictBefore],
          VERDICT_WORDS[row.verdictAfter],
        ]),
      note: 'Margins at the percentile of the verdict.',
    });
  }
};

function inputKind(kind: string): string {
  return INPUT_KINDS[kind] ?? kind;
}

/** The first lines of a long list, and how many more there are. */
function shortened(lines: readonly string[]): string[] {
  if (lines.length <= LARGEST_MOVES) return [...lines];
  return [...lines.slice(0, LARGEST_MOVES), `and ${lines.length - LARGEST_MOVES} more.`];
}
