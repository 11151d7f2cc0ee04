import { useState } from 'preact/hooks';
import { three } from '../../server/figures/index.ts';
import { all, call, type PartItem } from '../api.ts';
import { Empty, ProblemBox, useLoaded } from '../parts.tsx';
import { studyId } from '../state.ts';

const HEADER = 'partId,name,placeId,capabilityKradSi,capabilityBasis,requiredRdm';

export function PartsPage() {
  const study = studyId.value!;
  const { value, error, again } = useLoaded(() => all<PartItem>(`/api/parts?studyId=${study}`), study);
  const [text, setText] = useState(`${HEADER}\n`);
  const [failure, setFailure] = useState<unknown>(null);
  const send = async (csv: string) => {
    try {
      await call('POST', `/api/studies/${study}/parts.csv`, csv, 'text/csv');
      setFailure(null);
      setText(`${HEADER}\n`);
      again();
    } catch (problem) {
      setFailure(problem);
    }
  };
  const remove = async (id: string) => {
    try {
      await call('DELETE', `/api/parts/${id}`);
      setFailure(null);
      again();
    } catch (problem) {
      setFailure(problem);
    }
  };
  return (
    <>
      <h1>Parts</h1>
      <ProblemBox error={error} />
      {value?.length === 0 && <Empty>No part yet: paste a list below.</Empty>}
      {value !== null && value.length > 0 && (
        <table>
          <thead>
            <tr>
              <th>Id</th>
              <th>Part</th>
              <th>Technology</th>
              <th>Place</th>
              <th class="num">Capability, krad(Si)</th>
              <th>Basis</th>
              <th class="num">Required margin</th>
              <th>
                <span class="hidden">Delete</span>
              </th>
            </tr>
          </thead>
          <tbody>
            {value.map((part) => (
              <tr key={part.id}>
                <td>{part.partId}</td>
                <td>{part.name}</td>
                <td>{part.technology ?? '–'}</td>
                <td>{part.placeId}</td>
                <td class="num">
                  {part.failureDosesKradSi === undefined
                    ? three(part.capabilityKradSi)
                    : `lot of ${part.failureDosesKradSi.length}`}
                </td>
                <td>{part.capabilityBasis ?? '–'}</td>
                <td class="num">{part.requiredRdm === undefined ? 'study’s' : three(part.requiredRdm)}</td>
                <td>
                  <button type="button" aria-label={`Delete ${part.name}`} onClick={() => remove(part.id)}>
                    Delete
                  </button>
                </td>
              </tr>
            ))}
          </tbody>
        </table>
      )}
      <p>
        <a href={`/api/studies/${study}/parts.csv`}>Download as CSV</a>
      </p>
      <h2>Add parts</h2>
      <label>
        Paste CSV: all rows are kept, or none
        <textarea rows={8} value={text} onInput={(event) => setText(event.currentTarget.value)} />
      </label>
      <p>
        <button type="button" class="primary" onClick={() => send(text)}>
          Add these parts
        </button>{' '}
        <label class="file">
          or choose a CSV file
          <input
            type="file"
            accept=".csv,text/csv"
            onChange={async (event) => {
              // The event forgets its element once the handler waits.
              const input = event.currentTarget;
              const file = input.files?.[0];
              if (file !== undefined) await send(await file.text());
              input.value = '';
            }}
          />
        </label>
      </p>
      <ProblemBox error={failure} />
    </>
  );
}
