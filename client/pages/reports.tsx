import { useState } from 'preact/hooks';
import { type AssessmentItem, all, call, type ReportItem } from '../api.ts';
import { Empty, ProblemBox, useLoaded } from '../parts.tsx';
import { go, route, studyId } from '../state.ts';
import { DataTable } from '../table.tsx';

const FIELDS = [
  ['title', 'Title', 'Radiation dose and margins'],
  ['documentNumber', 'Document number', 'SL-001'],
  ['issue', 'Issue', '1'],
  ['preparer', 'Prepared by', ''],
  ['checker', 'Checked by', ''],
  ['approver', 'Approved by', ''],
  ['distribution', 'Distribution mark', ''],
] as const;

export function ReportsPage() {
  const study = studyId.value!;
  const { value, error, again } = useLoaded(() => all<ReportItem>(`/api/reports?studyId=${study}`), study);
  const assessments = useLoaded(() => all<AssessmentItem>(`/api/assessments?studyId=${study}`), study);
  const done = (assessments.value ?? []).filter((entry) => entry.state === 'done');
  const [, , word, wanted] = route.value.split('/');
  const [failure, setFailure] = useState<unknown>(null);
  const [busy, setBusy] = useState(false);
  const issue = async (event: SubmitEvent & { currentTarget: HTMLFormElement }) => {
    event.preventDefault();
    const data = new FormData(event.currentTarget);
    const previous = String(data.get('previousReportId') ?? '');
    setBusy(true);
    try {
      await call('POST', '/api/reports', {
        assessmentId: data.get('assessmentId'),
        dateUtc: data.get('dateUtc'),
        ...Object.fromEntries(FIELDS.map(([field]) => [field, data.get(field)])),
        ...(previous === '' ? {} : { previousReportId: previous }),
      });
      setFailure(null);
      again();
      go('/reports');
    } catch (problem) {
      setFailure(problem);
    } finally {
      setBusy(false);
    }
  };
  return (
    <>
      <h1>Reports</h1>
      <ProblemBox error={error} />
      {value?.length === 0 && <Empty>No report issued yet.</Empty>}
      {value !== null && value.length > 0 && (
        <DataTable
          name="Issued reports"
          rows={value}
          keyOf={(report) => report.id}
          columns={[
            {
              header: 'Document',
              value: (report) => report.documentNumber,
              cell: (report) => <a href={`/api/reports/${report.id}/report.pdf`}>{report.documentNumber} (PDF)</a>,
            },
            { header: 'Issue', value: (report) => report.issue },
            { header: 'Date', value: (report) => report.dateUtc },
            { header: 'Title', value: (report) => report.name },
            {
              header: 'SHA-256 of the PDF',
              value: (report) => report.pdfSha256,
              cell: (report) => <span class="small">{report.pdfSha256}</span>,
            },
          ]}
        />
      )}
      <h2>Issue a report</h2>
      {done.length === 0 ? (
        <Empty>A report needs an assessment that is done.</Empty>
      ) : (
        <form class="grid" onSubmit={issue}>
          <label>
            Assessment{' '}
            <select name="assessmentId">
              {done.map((entry) => (
                <option
                  key={entry.id}
                  value={entry.id}
                  selected={entry.id === (word === 'new' ? wanted : done[done.length - 1].id)}
                >
                  {entry.name}
                </option>
              ))}
            </select>
          </label>
          {FIELDS.map(([field, label, initial]) => (
            <label key={field}>
              {label} <input name={field} defaultValue={initial} required={initial !== ''} />
            </label>
          ))}
          <label>
            Date <input type="date" name="dateUtc" required defaultValue={new Date().toISOString().slice(0, 10)} />
          </label>
          <label>
            Changes against{' '}
            <select name="previousReportId">
              <option value="">no earlier issue</option>
              {(value ?? []).map((report) => (
                <option key={report.id} value={report.id}>
                  {report.documentNumber}, issue {report.issue}
                </option>
              ))}
            </select>
          </label>
          <button type="submit" class="primary" disabled={busy}>
            {busy ? 'Printing…' : 'Issue'}
          </button>
        </form>
      )}
      <ProblemBox error={failure} />
    </>
  );
}
