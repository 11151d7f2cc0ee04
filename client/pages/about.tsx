import { all, type EvidenceItem } from '../api.ts';
import { ProblemBox, useLoaded } from '../parts.tsx';

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
      <table>
        <thead>
          <tr>
            <th>Room</th>
            <th>What</th>
            <th>Ours</th>
            <th>Published</th>
            <th>Tolerance</th>
            <th>Source</th>
          </tr>
        </thead>
        <tbody>
          {(value ?? []).map((row) => (
            <tr key={row.what}>
              <td>{row.room}</td>
              <td>{row.what}</td>
              <td>{row.ours}</td>
              <td>{row.published}</td>
              <td>{row.tolerance}</td>
              <td>{row.source}</td>
            </tr>
          ))}
        </tbody>
      </table>
    </>
  );
}
