import { useState } from 'preact/hooks';
import { three } from '../../server/figures/index.ts';
import { all, call, type PartItem } from '../api.ts';
import { Empty, ProblemBox, useLoaded } from '../parts.tsx';
import { studyId } from '../state.ts';
import { DataTable } from '../table.tsx';
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
        <DataTable
          name="Parts"
          rows={value}
          keyOf={(part) => part.id}
          columns={[
            { header: 'Id', value: (part) => part.partId },
            { header: 'Part', value: (part) => part.name },
            { header: 'Technology', value: (part) => part.technology },
            { header: 'Place', value: (part) => part.placeId },
            {
              header: 'Capability, krad(Si)',
              numeric: true,
              value: (part) => part.capabilityKradSi,
              cell: (part) =>
                part.failureDosesKradSi === undefined
                  ? three(part.capabilityKradSi)
                  : `lot of ${part.failureDosesKradSi.length}`,
            },
            { header: 'Basis', value: (part) => part.capabilityBasis },
            {
              header: 'Required margin',
              numeric: true,
              value: (part) => part.requiredRdm,
              cell: (part) => (part.requiredRdm === undefined ? 'study’s' : three(part.requiredRdm)),
            },
            {
              header: 'Change',
              value: () => null,
              cell: (part) => (
                <>
                  <button type="button" aria-label={`Edit ${part.name}`} onClick={() => setEdited(part.id)}>
                    Edit
                  </button>{' '}
                  <button type="button" aria-label={`Delete ${part.name}`} onClick={() => remove(part.id)}>
                    Delete
                  </button>
                </>
              ),
            },
          ]}
        />
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
