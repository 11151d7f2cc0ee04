import { useEffect, useState } from 'preact/hooks';
import {
  fieldComparisonScene,
  fluenceByLScene,
  fluenceScene,
  fluxHistoryScene,
  percent,
  phaseFluenceScene,
  three,
} from '../../server/figures/index.ts';
import { all, call, type ExposureState, type TrajectoryItem } from '../api.ts';
import { Figure } from '../figure.tsx';
import { Empty, Link, ProblemBox, Progress, useLoaded } from '../parts.tsx';
import { route, studyId } from '../state.ts';
import { DataTable } from '../table.tsx';

const FIELD = { p05: 'p05PerCm2', p50: 'p50PerCm2', p95: 'p95PerCm2' } as const;

const MODES = [
  ['', 'as the rotation model allows'],
  ['sweep', 'sweep over all phases'],
  ['drawn', 'drawn from the model’s error'],
  ['published', 'as published'],
] as const;

/** Scenarios of the belts beside their medians. */
const SCENARIOS = [
  ['satelliteDips', 'satellites cut dips'],
  ['protonUpperBound', 'upper bound of the protons'],
  ['longTermMean', 'long-term mean of Uranus instead of the state met'],
] as const;

export function EnvironmentPage() {
  const study = studyId.value!;
  const { value, error } = useLoaded(() => all<TrajectoryItem>(`/api/trajectories?studyId=${study}`), study);
  const chosen = route.value.split('/')[2] ?? value?.[0]?.id;
  const flown = value?.find((entry) => entry.id === chosen);
  const [mode, setMode] = useState('');
  const [scenarios, setScenarios] = useState<readonly string[]>([]);
  return (
    <>
      <h1>Environment</h1>
      <ProblemBox error={error} />
      {value !== null && value.length === 0 && <Empty>No trajectory yet; upload one first.</Empty>}
      <div class="row">
        <nav class="tabs" aria-label="Trajectories">
          {(value ?? []).map((entry) => (
            <Link key={entry.id} to={`/environment/${entry.id}`} class={entry.id === chosen ? 'here' : ''}>
              {entry.name}
            </Link>
          ))}
        </nav>
        <label>
          Rotation phase{' '}
          <select value={mode} onChange={(event) => setMode(event.currentTarget.value)}>
            {MODES.map(([id, label]) => (
              <option key={id} value={id}>
                {label}
              </option>
            ))}
          </select>
        </label>
      </div>
      <fieldset class="row">
        <legend>Belts, beside their median</legend>
        {SCENARIOS.map(([id, label]) => (
          <label key={id}>
            <input
              type="checkbox"
              checked={scenarios.includes(id)}
              onChange={() =>
                setScenarios((old) => (old.includes(id) ? old.filter((one) => one !== id) : [...old, id]))
              }
            />{' '}
            {label}
          </label>
        ))}
      </fieldset>
      {flown !== undefined && (
        <Exposure
          key={`${flown.id}${mode}${scenarios.join()}`}
          trajectoryId={flown.id}
          planet={flown.planet}
          mode={mode}
          scenarios={scenarios}
        />
      )}
    </>
  );
}

interface ExposureProps {
  readonly trajectoryId: string;
  readonly planet: TrajectoryItem['planet'];
  readonly mode: string;
  readonly scenarios: readonly string[];
}

function Exposure({ trajectoryId, planet, mode, scenarios }: ExposureProps) {
  const [state, setState] = useState<ExposureState | null>(null);
  const [error, setError] = useState<unknown>(null);
  useEffect(() => {
    let gone = false;
    const watch = async () => {
      try {
        const fields = await all<{ id: string; planet: string }>('/api/field-models');
        const { id } = await call<{ id: string }>('POST', '/api/exposures', {
          trajectoryId,
          compareFieldModelIds: fields.filter((entry) => entry.planet === planet).map((entry) => entry.id),
          ...(mode === '' ? {} : { phase: { mode } }),
          ...(scenarios.includes('satelliteDips') ? { satelliteDips: true } : {}),
          ...(scenarios.includes('protonUpperBound') ? { protonUpperBound: true } : {}),
          ...(scenarios.includes('longTermMean') ? { solarWindState: 'long-term-mean' } : {}),
        });
        while (!gone) {
          const now = await call<ExposureState>('GET', `/api/exposures/${id}`);
          if (gone) return;
          setState(now);
          if (now.state !== 'queued' && now.state !== 'running') return;
          await new Promise((resolve) => setTimeout(resolve, 500));
        }
      } catch (failure) {
        setError(failure);
      }
    };
    watch();
    return () => {
      gone = true;
    };
  }, [trajectoryId, planet, mode, scenarios]);
  if (error !== null) return <ProblemBox error={error} />;
  if (state?.problem != null) return <ProblemBox error={new Error(state.problem.detail)} />;
  if (state?.summary == null)
    return <Progress share={state?.progress ?? 0} message="Following the path through the belts" />;
  const { summary } = state;
  const electrons = summary.species.electron;
  return (
    <>
      <dl class="facts">
        <dt>Belts</dt>
        <dd>{summary.beltModelId}</dd>
        <dt>Field and offset of the nominal variant</dt>
        <dd>
          {summary.nominal.fieldModelId}, {three(summary.nominal.offsetDeg)}°
        </dd>
        <dt>Phase error at arrival (1 σ)</dt>
        <dd>{summary.phaseSigmaDeg > 180 ? 'unknown phase' : `${three(summary.phaseSigmaDeg)}°`}</dd>
        <dt>90 % of the fluence in</dt>
        <dd>{three(summary.hoursOf90Percent)} h</dd>
        <dt>Draws above the Kennel-Petschek level</dt>
        <dd>
          {percent(summary.percentiles.aboveKennelPetschekShare)} ({summary.percentiles.kennelPetschekMeasure})
        </dd>
        <dt>From where nothing was measured</dt>
        <dd>{percent(electrons.byEvidence.extrapolated)} of the electrons above 1 MeV</dd>
      </dl>
      <Figure scene={fluxHistoryScene(summary)} caption="Integral electron flux along the path, nominal." />
      <Figure scene={fluenceScene(summary)} caption="Integral fluence, omnidirectional, nominal." />
      {summary.byPhase.length > 2 && (
        <Figure scene={phaseFluenceScene(summary)} caption="Electrons above 1 MeV against the rotation offset." />
      )}
      <Figure scene={fluenceByLScene(summary)} caption="Nominal fluence above 1 MeV in each bin of L." />
      {summary.fieldComparison.length > 1 && (
        <Figure
          scene={fieldComparisonScene(summary)}
          caption="Electron fluence on the same path and phase, median belts, by field model."
        />
      )}
      <h3>Fluence and peak flux of electrons, nominal</h3>
      <DataTable
        name="Fluence and peak flux of electrons"
        rows={electrons.peaks.map((peak, index) => ({
          ...peak,
          fluence: electrons.fluencePerCm2[index],
          band: summary.percentiles.electron[index],
        }))}
        keyOf={(peak) => String(peak.thresholdMeV)}
        columns={[
          {
            header: 'Above, MeV',
            numeric: true,
            value: (peak) => peak.thresholdMeV,
            cell: (peak) => three(peak.thresholdMeV),
          },
          {
            header: 'Fluence, cm⁻²',
            numeric: true,
            value: (peak) => peak.fluence,
            cell: (peak) => three(peak.fluence),
          },
          ...(['p05', 'p50', 'p95'] as const).map((p) => ({
            header: `${Number(p.slice(1))} %, cm⁻²`,
            numeric: true,
            value: (peak: { band: (typeof summary.percentiles.electron)[number] }) => peak.band?.[FIELD[p]],
            cell: (peak: { band: (typeof summary.percentiles.electron)[number] }) => three(peak.band?.[FIELD[p]]),
          })),
          {
            header: 'Peak flux, cm⁻² s⁻¹',
            numeric: true,
            value: (peak) => peak.fluxPerCm2S,
            cell: (peak) => three(peak.fluxPerCm2S),
          },
          { header: 'When, UTC', value: (peak) => peak.utc },
        ]}
      />
    </>
  );
}
