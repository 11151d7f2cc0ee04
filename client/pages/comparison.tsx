import { useState } from 'preact/hooks';
import { three } from '../../server/figures/index.ts';
import type { AssessmentComparison } from '../../server/margin/compare.ts';
import { type AssessmentItem, call } from '../api.ts';
import { ProblemBox, useLoaded, VerdictTag } from '../parts.tsx';

/** What changed since another assessment: inputs in words, then every dose and margin that moved, largest first. */
export function Comparison({ id, others }: { id: string; others: readonly AssessmentItem[] }) {
  const [other, setOther] = useState('');
  const earlier = others.filter((entry) => entry.id !== id && entry.state === 'done');
  const { value, error } = useLoaded(
    () => call<AssessmentComparison>('GET', `/api/assessments/${id}/compare?with=${other}`),
    other === '' ? null : `${id}/${other}`,
  );
  if (earlier.length === 0) return null;
  return (
    <>
      <h2>What changed</h2>
      <label>
        Compare with{' '}
        <select value={other} onChange={(event) => setOther(event.currentTarget.value)}>
          <option value="">no other assessment</option>
          {earlier.map((entry) => (
            <option key={entry.id} value={entry.id}>
              {entry.name}, {entry.createdUtc.slice(0, 16).replace('T', ' ')} UTC
            </option>
          ))}
        </select>
      </label>
      <ProblemBox error={error} />
      {other !== '' && value !== null && <Changes comparison={value} />}
    </>
  );
}

function Changes({ comparison }: { comparison: AssessmentComparison }) {
  if (comparison.sameResult) return <p>Both results are the same to the last digit.</p>;
  const doses = comparison.doses
    .filter((row) => row.ratio !== 1)
    .sort((a, b) => distance(b.ratio) - distance(a.ratio))
    .slice(0, SHOWN);
  const margins = comparison.margins
    .filter((row) => row.achievedRdmBefore !== row.achievedRdmAfter || row.verdictBefore !== row.verdictAfter)
    .sort(
      (a, b) =>
        Number(b.verdictBefore !== b.verdictAfter) - Number(a.verdictBefore !== a.verdictAfter) ||
        distance(ratio(b)) - distance(ratio(a)),
    )
    .slice(0, SHOWN);
  const lines = [
    ...comparison.inputs.map(({ kind, name, change }) => `${KINDS[kind] ?? kind} “${name}”: ${change}`),
    ...comparison.settings.map(({ setting, before, after }) => `${setting}: ${before} before, ${after} now`),
    ...comparison.onlyBefore.map((row) => `${row}: only in the other assessment`),
    ...comparison.onlyAfter.map((row) => `${row}: only in this assessment`),
  ];
  return (
    <>
      <p>
        {comparison.inputs.length} inputs and {comparison.settings.length} settings differ; of {comparison.doses.length}{' '}
        doses in both, {comparison.doses.filter((row) => row.ratio !== 1).length} moved; {comparison.verdicts.length}{' '}
        verdicts changed.
      </p>
      <ul>
        {lines.map((line) => (
          <li key={line}>{line}</li>
        ))}
      </ul>
      {doses.length > 0 && (
        <table>
          <caption>Doses that moved most, at most {SHOWN}</caption>
          <thead>
            <tr>
              <th>Case</th>
              <th>Option</th>
              <th>Place</th>
              <th class="num">Before, krad(Si)</th>
              <th class="num">Now, krad(Si)</th>
              <th class="num">Now / before</th>
              <th class="num">95 % before, krad(Si)</th>
              <th class="num">95 % now, krad(Si)</th>
            </tr>
          </thead>
          <tbody>
            {doses.map((row) => (
              <tr key={`${row.caseName}/${row.optionName}/${row.placeName}`}>
                <td>{row.caseName}</td>
                <td>{row.optionName}</td>
                <td>{row.placeName}</td>
                <td class="num">{three(row.nominalBeforeKradSi)}</td>
                <td class="num">{three(row.nominalAfterKradSi)}</td>
                <td class="num">{three(row.ratio)}</td>
                <td class="num">{three(row.p95BeforeKradSi)}</td>
                <td class="num">{three(row.p95AfterKradSi)}</td>
              </tr>
            ))}
          </tbody>
        </table>
      )}
      {margins.length > 0 && (
        <table>
          <caption>Margins that moved, changed verdicts first, at most {SHOWN}</caption>
          <thead>
            <tr>
              <th>Part</th>
              <th>Case</th>
              <th>Option</th>
              <th class="num">Margin before</th>
              <th class="num">Margin now</th>
              <th>Verdict before</th>
              <th>Verdict now</th>
            </tr>
          </thead>
          <tbody>
            {margins.map((row) => (
              <tr key={`${row.partName}/${row.caseName}/${row.optionName}`}>
                <td>{row.partName}</td>
                <td>{row.caseName}</td>
                <td>{row.optionName}</td>
                <td class="num">{three(row.achievedRdmBefore)}</td>
                <td class="num">{three(row.achievedRdmAfter)}</td>
                <td>
                  <VerdictTag verdict={row.verdictBefore} />
                </td>
                <td>
                  <VerdictTag verdict={row.verdictAfter} />
                </td>
              </tr>
            ))}
          </tbody>
        </table>
      )}
    </>
  );
}

const SHOWN = 30;

const KINDS: Readonly<Record<string, string>> = {
  trajectory: 'Trajectory',
  fluence: 'Fluence of',
  case: 'Case',
  option: 'Option',
  response: 'Response behind',
  part: 'Part',
  partPlace: 'Place of part',
  otherSource: 'Other source',
  doseDepthTable: 'Dose-depth table',
};

/** How far a ratio is from one; unknown ratios come last. */
function distance(value: number | null): number {
  return value === null || value <= 0 ? -1 : Math.abs(Math.log(value));
}

function ratio(row: AssessmentComparison['margins'][number]): number | null {
  const { achievedRdmBefore: before, achievedRdmAfter: after } = row;
  return before === null || after === null || before === 0 ? null : after / before;
}
