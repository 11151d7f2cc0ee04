import { useEffect, useState } from 'preact/hooks';
import { doseDepthScene, marginScene, massScene, percent, phaseScene, three } from '../../server/figures/index.ts';
import type { AssessmentResult, Verdict } from '../../server/margin/result.ts';
import {
  type AssessmentDetail,
  type AssessmentItem,
  all,
  type CaseItem,
  call,
  type OptionItem,
  type OtherSourceItem,
} from '../api.ts';
import { Figure } from '../figure.tsx';
import { Empty, Link, ProblemBox, Progress, useLoaded, VerdictTag } from '../parts.tsx';
import { go, route, studyId } from '../state.ts';
import { DataTable } from '../table.tsx';
import { BesideDose } from './beside.tsx';
import { Comparison } from './comparison.tsx';
import { OtherSources } from './otherSources.tsx';

export function MarginsPage() {
  const study = studyId.value!;
  const { value, error, again } = useLoaded(() => all<AssessmentItem>(`/api/assessments?studyId=${study}`), study);
  const chosen = route.value.split('/')[2] ?? value?.[value.length - 1]?.id;
  return (
    <>
      <h1>Margins</h1>
      <ProblemBox error={error} />
      <nav class="tabs" aria-label="Assessments">
        {(value ?? []).map((entry) => (
          <Link key={entry.id} to={`/margins/${entry.id}`} class={entry.id === chosen ? 'here' : ''}>
            {entry.name}
          </Link>
        ))}
      </nav>
      <NewAssessment onMade={again} />
      {value !== null && value.length === 0 && (
        <Empty>No assessment yet. Choose cases and options above; the doses follow in a minute or so.</Empty>
      )}
      {chosen !== undefined && <Assessment key={chosen} id={chosen} others={value ?? []} />}
    </>
  );
}

function NewAssessment({ onMade }: { onMade: () => void }) {
  const study = studyId.value!;
  const cases = useLoaded(() => all<CaseItem>(`/api/cases?studyId=${study}`), study);
  const options = useLoaded(() => all<OptionItem>(`/api/options?studyId=${study}`), study);
  const [error, setError] = useState<unknown>(null);
  const [otherSources, setOtherSources] = useState<readonly OtherSourceItem[]>([]);
  const start = async (event: SubmitEvent & { currentTarget: HTMLFormElement }) => {
    event.preventDefault();
    const data = new FormData(event.currentTarget);
    const picked = (prefix: string, items: readonly { id: string }[] | null) =>
      (items ?? []).filter((entry) => data.get(`${prefix}${entry.id}`) !== null).map((entry) => entry.id);
    try {
      const { id } = await call<{ id: string }>('POST', '/api/assessments', {
        studyId: study,
        name: data.get('name'),
        caseIds: picked('case', cases.value),
        optionIds: picked('option', options.value),
        otherSources,
        otherTargetMaterialIds: ['SiO2', 'GaAs'].filter((target) => data.get(target) !== null),
      });
      setError(null);
      onMade();
      go(`/margins/${id}`);
    } catch (failure) {
      setError(failure);
    }
  };
  return (
    <details>
      <summary>New assessment</summary>
      <form onSubmit={start}>
        <label>
          Name <input name="name" required defaultValue="Assessment" />
        </label>
        <fieldset>
          <legend>Cases</legend>
          {(cases.value ?? []).map((entry) => (
            <label key={entry.id} class="check">
              <input type="checkbox" name={`case${entry.id}`} defaultChecked /> {entry.name}
            </label>
          ))}
        </fieldset>
        <fieldset>
          <legend>Options</legend>
          {(options.value ?? []).map((entry) => (
            <label key={entry.id} class="check">
              <input type="checkbox" name={`option${entry.id}`} defaultChecked /> {entry.name}
            </label>
          ))}
        </fieldset>
        <fieldset>
          <legend>Dose also in</legend>
          <label class="check">
            <input type="checkbox" name="SiO2" /> SiO₂
          </label>
          <label class="check">
            <input type="checkbox" name="GaAs" /> GaAs
          </label>
        </fieldset>
        <button type="submit" class="primary">
          Assess
        </button>
        <ProblemBox error={error} />
      </form>
      <OtherSources value={otherSources} onChange={setOtherSources} />
    </details>
  );
}

function Assessment({ id, others }: { id: string; others: readonly AssessmentItem[] }) {
  const [detail, setDetail] = useState<AssessmentDetail | null>(null);
  const [error, setError] = useState<unknown>(null);
  useEffect(() => {
    let gone = false;
    const watch = async () => {
      try {
        while (!gone) {
          const now = await call<AssessmentDetail>('GET', `/api/assessments/${id}`);
          if (gone) return;
          setDetail(now);
          if (now.state !== 'queued' && now.state !== 'running') return;
          await new Promise((resolve) => setTimeout(resolve, 700));
        }
      } catch (failure) {
        setError(failure);
      }
    };
    watch();
    return () => {
      gone = true;
    };
  }, [id]);
  if (error !== null) return <ProblemBox error={error} />;
  if (detail === null) return <p role="status">Loading…</p>;
  if (detail.problem !== null) return <ProblemBox error={new Error(detail.problem.detail)} />;
  if (detail.state === 'cancelled') return <Empty>This assessment was cancelled.</Empty>;
  if (detail.result === null) {
    return (
      <Progress
        share={detail.progress}
        message={detail.message === '' ? 'Waiting for its turn' : detail.message}
        onCancel={() => call('POST', `/api/jobs/${detail.jobId}/cancel`)}
      />
    );
  }
  return (
    <>
      <Result id={id} result={detail.result} />
      <Comparison id={id} others={others} />
    </>
  );
}

function Result({ id, result }: { id: string; result: AssessmentResult }) {
  const [caseId, setCaseId] = useState(result.cases[0]?.caseId ?? '');
  const [failing, setFailing] = useState(false);
  const optionName = (optionId: string) =>
    result.options.find((option) => option.optionId === optionId)?.name ?? optionId;
  const caseName = (wanted: string) => result.cases.find((entry) => entry.caseId === wanted)?.name ?? wanted;
  const partName = (partId: string) => result.parts.find((part) => part.partId === partId)?.name ?? partId;
  const placeName = (optionId: string, placeId: string) =>
    result.options.find((option) => option.optionId === optionId)?.places.find((place) => place.placeId === placeId)
      ?.name ?? placeId;
  const doses = result.shieldDose.filter((row) => row.caseId === caseId);
  const movedAt = (row: { optionId: string; placeId: string }) =>
    result.sensitivity.find(
      (one) => one.caseId === caseId && one.optionId === row.optionId && one.placeId === row.placeId,
    );
  const margins = result.margins.filter((row) => row.caseId === caseId && (!failing || row.verdict !== 'meets'));
  const depth = result.doseDepth.find((row) => row.caseId === caseId);
  const phased = doses.find((row) => row.byPhase.length > 2);
  const compared = result.comparison.filter((row) => row.caseId === caseId);
  const places = [...new Set(compared.map((row) => row.placeId))];
  const lowest = margins
    .filter((row) => row.achievedRdmAtVerdict !== null)
    .sort((a, b) => a.achievedRdmAtVerdict! / a.requiredRdm - b.achievedRdmAtVerdict! / b.requiredRdm)
    .slice(0, 10);
  const { summary } = result;
  return (
    <>
      <section class="card" aria-label="Result at a glance">
        <ul class="counts">
          {(Object.entries(summary.verdictCounts) as [Verdict, number][]).map(([verdict, count]) => (
            <li key={verdict}>
              <b>{count}</b> <VerdictTag verdict={verdict} />
            </li>
          ))}
        </ul>
        {summary.lowestMargin !== null && (
          <p>
            Lowest margin: <b>{three(summary.lowestMargin.achievedRdmAtVerdict)}</b> of{' '}
            {three(summary.lowestMargin.requiredRdm)} required, {partName(summary.lowestMargin.partId)} in{' '}
            {caseName(summary.lowestMargin.caseId)} with {optionName(summary.lowestMargin.optionId)};{' '}
            {percent(summary.lowestMargin.extrapolatedFraction)} of that dose comes from where nothing was measured.
          </p>
        )}
        {summary.whatWouldChange.length > 0 && (
          <ul>
            {summary.whatWouldChange.map((sentence) => (
              <li key={sentence}>{sentence}</li>
            ))}
          </ul>
        )}
        <p>
          <a href={`/api/assessments/${id}/table.csv`}>Table as CSV</a> ·{' '}
          <a href={`/api/assessments/${id}/result.json`}>Result as JSON</a> ·{' '}
          <Link to={`/reports/new/${id}`}>Issue a report</Link>
        </p>
      </section>
      <div class="row">
        <label>
          Case{' '}
          <select value={caseId} onChange={(event) => setCaseId(event.currentTarget.value)}>
            {result.cases.map((entry) => (
              <option key={entry.caseId} value={entry.caseId}>
                {entry.name}
              </option>
            ))}
          </select>
        </label>
        <label class="check">
          <input type="checkbox" checked={failing} onChange={(event) => setFailing(event.currentTarget.checked)} /> only
          what does not meet
        </label>
      </div>
      <h2>Dose behind each shield</h2>
      <DataTable
        name="Dose behind each shield"
        rows={doses}
        keyOf={(row) => `${row.optionId}${row.placeId}`}
        columns={[
          { header: 'Option', value: (row) => optionName(row.optionId) },
          { header: 'Place', value: (row) => placeName(row.optionId, row.placeId) },
          {
            header: 'Nominal, krad(Si)',
            numeric: true,
            value: (row) => row.doseKradSi?.total,
            cell: (row) => row.notAssessed ?? three(row.doseKradSi?.total),
          },
          {
            header: '5 %, krad(Si)',
            numeric: true,
            value: (row) => row.band?.p05,
            cell: (row) => three(row.band?.p05),
          },
          {
            header: '95 %, krad(Si)',
            numeric: true,
            value: (row) => row.band?.p95,
            cell: (row) => three(row.band?.p95),
          },
          ...(['electron', 'bremsstrahlung', 'proton'] as const).map((part) => ({
            header: { electron: 'Electrons', bremsstrahlung: 'Bremsstrahlung', proton: 'Protons' }[part],
            numeric: true,
            value: (row: (typeof doses)[number]) =>
              row.doseKradSi === null ? null : row.doseKradSi[part] / row.doseKradSi.total,
            cell: (row: (typeof doses)[number]) =>
              row.doseKradSi === null ? '–' : percent(row.doseKradSi[part] / row.doseKradSi.total),
          })),
          {
            header: 'Layers −10 %, krad(Si)',
            numeric: true,
            value: (row) => movedAt(row)?.thinner10Pct?.doseKradSi,
            cell: (row) => three(movedAt(row)?.thinner10Pct?.doseKradSi),
          },
          {
            header: 'Layers +10 %, krad(Si)',
            numeric: true,
            value: (row) => movedAt(row)?.thicker10Pct?.doseKradSi,
            cell: (row) => three(movedAt(row)?.thicker10Pct?.doseKradSi),
          },
          {
            header: 'Nothing measured',
            numeric: true,
            value: (row) => row.extrapolatedFraction,
            cell: (row) => percent(row.extrapolatedFraction),
          },
        ]}
      />
      {lowest.length > 0 && (
        <Figure
          scene={marginScene(
            lowest.map((row) => ({ label: `${partName(row.partId)} · ${optionName(row.optionId)}`, row })),
          )}
          caption="Lowest margins of this case: bar from the 95th to the 50th percentile of the dose; upright line: required."
        />
      )}
      <h2>Margins of the parts</h2>
      <DataTable
        name="Margins"
        rows={margins}
        keyOf={(row) => `${row.partId}${row.optionId}`}
        columns={[
          { header: 'Part', value: (row) => partName(row.partId) },
          { header: 'Option', value: (row) => optionName(row.optionId) },
          { header: 'Place', value: (row) => placeName(row.optionId, row.placeId) },
          {
            header: 'Capability, krad(Si)',
            numeric: true,
            value: (row) => row.capabilityKradSi,
            cell: (row) => three(row.capabilityKradSi),
          },
          {
            header: 'Dose 95 %, krad(Si)',
            numeric: true,
            value: (row) => row.doseP95KradSi,
            cell: (row) => three(row.doseP95KradSi),
          },
          {
            header: 'Achieved 95 %',
            numeric: true,
            value: (row) => row.achievedRdmP95,
            cell: (row) => three(row.achievedRdmP95),
          },
          { header: 'Required', numeric: true, value: (row) => row.requiredRdm, cell: (row) => three(row.requiredRdm) },
          {
            header: 'P(margin met)',
            numeric: true,
            value: (row) => row.confidence,
            cell: (row) => percent(row.confidence),
          },
          {
            header: 'Verdict',
            value: (row) => row.verdict,
            cell: (row) => (
              <>
                <VerdictTag verdict={row.verdict} />
                <span class="small"> {result.verdictReasons[row.reason]}</span>
              </>
            ),
          },
        ]}
      />
      <BesideDose result={result} caseId={caseId} />
      <h2>Options side by side</h2>
      <div class="columns">
        {places.map((placeId) => {
          const rows = compared.filter(
            (row) => row.placeId === placeId && row.massKg !== null && row.doseKradSi !== null,
          );
          return rows.length === 0 ? null : (
            <Figure
              key={placeId}
              scene={massScene(
                rows.map((row) => ({ label: optionName(row.optionId), row })),
                caseName(caseId),
              )}
              caption={`${placeName(rows[0].optionId, placeId)}: median dose against mass; filled marks are options that none beats in both.`}
            />
          );
        })}
      </div>
      {depth !== undefined && (
        <Figure
          scene={doseDepthScene(depth, caseName(caseId))}
          caption={`Dose behind aluminium: ${depth.targetText}.`}
        />
      )}
      {phased !== undefined && (
        <Figure
          scene={phaseScene(phased, caseName(caseId))}
          caption={`${optionName(phased.optionId)}, ${placeName(phased.optionId, phased.placeId)}: nominal dose against the rotation offset.`}
        />
      )}
      {result.notices.map((notice) => (
        <p key={notice.text} class={`notice ${notice.severity}`}>
          {notice.text}
        </p>
      ))}
      <p class="small">
        Engine {result.provenance.engineVersion} · seed {result.provenance.seed} · result SHA-256{' '}
        {result.provenance.resultSha256}
      </p>
    </>
  );
}
