import { useEffect, useState } from 'preact/hooks';
import { three } from '../../server/figures/index.ts';
import { all, type CaseItem, call, type PartItem, type StackItem, type ThicknessState } from '../api.ts';
import { ProblemBox, Progress, useLoaded } from '../parts.tsx';
import { studyId } from '../state.ts';

/** How thick one layer must be for a dose or for the margins of parts; several stacks compete by mass. */
export function Solver({ stacks, onMade }: { stacks: readonly StackItem[]; onMade: () => void }) {
  const study = studyId.value!;
  const cases = useLoaded(() => all<CaseItem>(`/api/cases?studyId=${study}`), study);
  const parts = useLoaded(() => all<PartItem>(`/api/parts?studyId=${study}`), study);
  const [kind, setKind] = useState<'dose' | 'margin'>('dose');
  const [error, setError] = useState<unknown>(null);
  const [search, setSearch] = useState<string | null>(null);
  const start = async (event: SubmitEvent & { currentTarget: HTMLFormElement }) => {
    event.preventDefault();
    const data = new FormData(event.currentTarget);
    const chosen = (prefix: string, items: readonly { id: string }[] | null) =>
      (items ?? []).filter((entry) => data.get(`${prefix}${entry.id}`) !== null).map((entry) => entry.id);
    const percentile = String(data.get('percentile'));
    const areaM2 = Number(data.get('areaM2'));
    const picked = chosen('stack', stacks);
    try {
      const { id } = await call<{ id: string }>('POST', '/api/thickness/jobs', {
        studyId: study,
        caseIds: chosen('case', cases.value),
        candidates: stacks
          .filter((stack) => picked.includes(stack.id))
          .map((stack) => ({
            name: stack.name,
            stack: {
              geometry: stack.geometry,
              layers: stack.layers,
              ...(stack.innerRadiusMm === undefined ? {} : { innerRadiusMm: stack.innerRadiusMm }),
              ...(stack.backing === undefined ? {} : { backing: stack.backing }),
            },
            layerIndex: Number(data.get(`layer${stack.id}`)),
          })),
        ...(kind === 'dose'
          ? { targetDoseKradSi: Number(data.get('targetDoseKradSi')) }
          : { partIds: chosen('part', parts.value) }),
        percentile: percentile === 'nominal' ? percentile : Number(percentile),
        minimumMm: Number(data.get('minimumMm')),
        maximumMm: Number(data.get('maximumMm')),
        ...(areaM2 > 0 ? { areaM2 } : {}),
      });
      setError(null);
      setSearch(id);
    } catch (failure) {
      setError(failure);
    }
  };
  return (
    <details>
      <summary>Find the thickness for a target</summary>
      <form onSubmit={start}>
        <fieldset>
          <legend>Stacks that compete, and the layer that may change</legend>
          {stacks.map((stack, index) => (
            <p key={stack.id}>
              <label class="check">
                <input type="checkbox" name={`stack${stack.id}`} defaultChecked={index === 0} /> {stack.name}
              </label>{' '}
              <select name={`layer${stack.id}`} aria-label={`Layer of ${stack.name} that may change`}>
                {stack.layersShown.map((layer, k) => (
                  <option key={k} value={k}>
                    layer {k + 1}: {layer.materialName}, now {three(layer.thicknessMm)} mm
                  </option>
                ))}
              </select>
            </p>
          ))}
        </fieldset>
        <fieldset>
          <legend>Cases: the highest dose counts</legend>
          {(cases.value ?? []).map((entry) => (
            <label key={entry.id} class="check">
              <input type="checkbox" name={`case${entry.id}`} defaultChecked /> {entry.name}
            </label>
          ))}
        </fieldset>
        <fieldset>
          <legend>Target</legend>
          <label class="check">
            <input type="radio" name="kind" checked={kind === 'dose'} onChange={() => setKind('dose')} /> a dose
          </label>
          <label class="check">
            <input type="radio" name="kind" checked={kind === 'margin'} onChange={() => setKind('margin')} /> the
            required margins of parts behind this shield
          </label>
          {kind === 'dose' ? (
            <label>
              Dose at most, krad(Si){' '}
              <input name="targetDoseKradSi" inputMode="decimal" required defaultValue="20" size={8} />
            </label>
          ) : (
            (parts.value ?? []).map((part) => (
              <label key={part.id} class="check">
                <input type="checkbox" name={`part${part.id}`} defaultChecked /> {part.name}
              </label>
            ))
          )}
        </fieldset>
        <div class="grid">
          <label>
            Dose taken{' '}
            <select name="percentile">
              <option value="nominal">nominal</option>
              <option value="50">50th percentile</option>
              <option value="95">95th percentile</option>
              <option value="99">99th percentile</option>
            </select>
          </label>
          <label>
            Thinnest, mm <input name="minimumMm" inputMode="decimal" defaultValue="0.1" required />
          </label>
          <label>
            Thickest, mm <input name="maximumMm" inputMode="decimal" defaultValue="25" required />
          </label>
          <label>
            Area for the mass, m² <input name="areaM2" inputMode="decimal" defaultValue="1" />
          </label>
        </div>
        <button type="submit" class="primary">
          Find thickness
        </button>
        <ProblemBox error={error} />
      </form>
      {search !== null && <Found key={search} id={search} onMade={onMade} />}
    </details>
  );
}

function Found({ id, onMade }: { id: string; onMade: () => void }) {
  const [state, setState] = useState<ThicknessState | null>(null);
  const [error, setError] = useState<unknown>(null);
  useEffect(() => {
    let gone = false;
    const watch = async () => {
      try {
        while (!gone) {
          const now = await call<ThicknessState>('GET', `/api/thickness/jobs/${id}`);
          if (gone) return;
          setState(now);
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
  if (state === null) return <p role="status">Waiting for the search…</p>;
  if (state.problem !== null) return <ProblemBox error={new Error(state.problem.detail)} />;
  if (state.state === 'cancelled') return <p>This search was cancelled.</p>;
  if (state.result === null) {
    return (
      <Progress
        share={state.progress}
        message={state.message === '' ? 'Waiting for its turn' : state.message}
        onCancel={() => call('POST', `/api/jobs/${id}/cancel`)}
      />
    );
  }
  const { targetDoseKradSi, drivingPartId, solutions, lightest } = state.result;
  const keep = async (index: number) => {
    const { name, thicknessMm, stack } = solutions[index];
    try {
      await call('POST', '/api/stacks', {
        ...stack,
        studyId: studyId.value,
        name: `${name}, ${three(thicknessMm)} mm for ${three(targetDoseKradSi)} krad(Si)`,
      });
      setError(null);
      onMade();
    } catch (failure) {
      setError(failure);
    }
  };
  return (
    <table>
      <caption>
        Thickness for {three(targetDoseKradSi)} krad(Si)
        {drivingPartId !== null && `, set by part ${drivingPartId}`}
      </caption>
      <thead>
        <tr>
          <th>Stack</th>
          <th class="num">Thickness, mm</th>
          <th class="num">Mass, kg</th>
          <th class="num">Dose there, krad(Si)</th>
          <th class="num">Statistical error, 1 σ</th>
          <th>Answer</th>
          <th>
            <span class="hidden">Keep</span>
          </th>
        </tr>
      </thead>
      <tbody>
        {solutions.map((solution, index) => (
          <tr key={solution.name}>
            <td>
              {solution.name}
              <span class="small"> {solution.stackText}</span>
            </td>
            <td class="num">{three(solution.thicknessMm)}</td>
            <td class="num">{solution.massKg === null ? '–' : three(solution.massKg)}</td>
            <td class="num">{three(solution.doseKradSi)}</td>
            <td class="num">{three(100 * solution.statisticalErrorRel)} %</td>
            <td>
              {ANSWERS[solution.status]}
              {index === lightest && ' · lightest that meets it'}
            </td>
            <td>
              <button type="button" aria-label={`Keep ${solution.name} as a new stack`} onClick={() => keep(index)}>
                Keep as new stack
              </button>
            </td>
          </tr>
        ))}
      </tbody>
    </table>
  );
}

const ANSWERS = {
  solved: 'meets the target within 1 %',
  metAtThinnest: 'met at the thinnest already',
  notMetAtThickest: 'not met at the thickest',
} as const;
