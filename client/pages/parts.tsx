import { useState } from 'preact/hooks';
import { three } from '../../server/figures/index.ts';
import { all, call, type PartItem } from '../api.ts';
import { Empty, ProblemBox, useLoaded } from '../parts.tsx';
import { studyId } from '../state.ts';
import { PartForm } from './partForm.tsx';

const HEADER = 'partId,name,placeId,capabilityKradSi,capabilityBasis,requiredRdm';

export function PartsPage() {
  const study = studyId.value!;
  const { value, error, again } = useLoaded(() => all<PartItem>(`/api/parts?studyId=${study}`), study);
  const [text, setText] = useState(`${HEADER}\n`);
  const [failure, setFailure] = useState<unknown>(null);
  const [replace, setReplace] = useState(false);
  const [edited, setEdited] = useState<string | null>(null);
  const send = async (list: string, kind: 'csv' | 'json' = 'csv') => {
    try {
      const type = kind === 'csv' ? 'text/csv' : 'application/json';
      await call('POST', `/api/studies/${study}/parts.${kind}?replace=${replace}`, list, type);
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
                  <button type="button" aria-label={`Edit ${part.name}`} onClick={() => setEdited(part.id)}>
                    Edit
                  </button>{' '}
                  <button type="button" aria-label={`Delete ${part.name}`} onClick={() => remove(part.id)}>
                    Delete
                  </button>
                </td>
              </tr>
            ))}
          </tbody>
        </table>
      )}
      {value
        ?.filter((part) => part.id === edited)
        .map((part) => (
          <PartForm
            key={part.id}
            part={part}
            onDone={() => {
              setEdited(null);
              again();
            }}
          />
        ))}
      <p>
        <a href={`/api/studies/${study}/parts.csv`}>Download as CSV</a> ·{' '}
        <a href={`/api/studies/${study}/parts.json`} download="parts.json">
          as JSON
        </a>
      </p>
      <h2>Add parts</h2>
      <label>
        Paste CSV: all rows are kept, or none
        <textarea rows={8} value={text} onInput={(event) => setText(event.currentTarget.value)} />
      </label>
      <label class="check">
        <input type="checkbox" checked={replace} onChange={(event) => setReplace(event.currentTarget.checked)} />{' '}
        replace parts of the same id
      </label>
      <p>
        <button type="button" class="primary" onClick={() => send(text)}>
          Add these parts
        </button>{' '}
        <label class="file">
          or choose a CSV or JSON file
          <input
            type="file"
            accept=".csv,.json,text/csv,application/json"
            onChange={async (event) => {
              // The event forgets its element once the handler waits.
              const input = event.currentTarget;
              const file = input.files?.[0];
              if (file !== undefined) await send(await file.text(), file.name.endsWith('.json') ? 'json' : 'csv');
              input.value = '';
            }}
          />
        </label>
      </p>
      <ProblemBox error={failure} />
    </>
  );
}
