import { all, type EvidenceItem } from '../api.ts';
import { ProblemBox, useLoaded } from '../parts.tsx';
import { DataTable } from '../table.tsx';

const NOTES = [
  'Preliminary planning aid. The environment specification of the project and the radiation and parts standards of its agency take precedence; qualified radiation-effects engineers decide.',
  'No published standard defines the trapped environment of Uranus or Neptune; the belts here rest on one flyby each, in 1986 and 1989.',
  'The magnetic longitude at arrival is uncertain; where the rotation period no longer holds it, doses are drawn over all phases.',
  'The dose itself carries no margin. The design margin is shown separately; it is not a safety factor.',
  'Solar-proton, other-planet and radioisotope doses are as entered; what is not entered is not in the sums.',
  'Single-event effects, dose-rate effects and ageing are not assessed; internal charging is screened and flagged only.',
];

export function AboutPage() {
  const { value, error } = useLoaded(() => all<EvidenceItem>('/api/evidence'), 'evidence');
  return (
    <>
      <h1>Cautions and evidence</h1>
      <ul>
        {NOTES.map((note) => (
          <li key={note}>{note}</li>
        ))}
      </ul>
      <h2>Checks against outside numbers</h2>
      <ProblemBox error={error} />
      <DataTable
        name="Checks against outside numbers"
        rows={value ?? []}
        keyOf={(row) => row.what}
        columns={[
          { header: 'Room', value: (row) => row.room },
          { header: 'What', value: (row) => row.what },
          { header: 'Ours', value: (row) => row.ours },
          { header: 'Published', value: (row) => row.published },
          { header: 'Tolerance', value: (row) => row.tolerance },
          { header: 'Source', value: (row) => row.source },
        ]}
      />
    </>
  );
}
