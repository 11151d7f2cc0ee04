import { useState } from 'preact/hooks';
import {
  ENCOUNTER_LOOKS,
  type EncounterLook,
  type EncounterView,
  encounterScene,
  three,
} from '../../server/figures/index.ts';
import { all, type CaseItem, call, type TrajectoryItem } from '../api.ts';
import { Figure } from '../figure.tsx';
import { Empty, Link, ProblemBox, useLoaded } from '../parts.tsx';
import { go, route, studyId } from '../state.ts';
import { DataTable } from '../table.tsx';

interface Waiting {
  readonly file: File;
  readonly reading: TrajectoryItem | null;
  readonly error: unknown;
}

export function TrajectoriesPage() {
  const study = studyId.value!;
  const { value, error, again } = useLoaded(() => all<TrajectoryItem>(`/api/trajectories?studyId=${study}`), study);
  const selected = route.value.split('/')[2];
  const shown = value?.find((entry) => entry.id === selected);
  return (
    <>
      <h1>Trajectories</h1>
      <ProblemBox error={error} />
      <Upload onKept={again} />
      <Sketch onKept={again} />
      {value === null ? (
        <p role="status">Loading…</p>
      ) : value.length === 0 ? (
        <Empty>No trajectory yet: drop an ephemeris above, or sketch one.</Empty>
      ) : (
        <DataTable
          name="Trajectories"
          rows={value}
          keyOf={(entry) => entry.id}
          selected={selected}
          columns={[
            {
              header: 'Name',
              value: (entry) => entry.name,
              cell: (entry) => <Link to={`/trajectories/${entry.id}`}>{entry.name}</Link>,
            },
            { header: 'Planet', value: (entry) => (entry.planet === 'uranus' ? 'Uranus' : 'Neptune') },
            { header: 'Closest approach, UTC', value: (entry) => closest(entry)?.utc },
            {
              header: 'Radius, planet radii',
              numeric: true,
              value: (entry) => closest(entry)?.radiusPlanetRadii,
              cell: (entry) => three(closest(entry)?.radiusPlanetRadii),
            },
            {
              header: 'Speed, km/s',
              numeric: true,
              value: (entry) => closest(entry)?.speedKmS,
              cell: (entry) => three(closest(entry)?.speedKmS),
            },
            { header: 'Format', value: (entry) => entry.format },
            {
              header: 'Notices',
              value: (entry) => entry.notices.filter((notice) => notice.severity !== 'info').length || 'none',
            },
          ]}
        />
      )}
      {shown !== undefined && <Reading entry={shown} onDeleted={again} />}
      {shown !== undefined && <Encounter key={shown.id} entry={shown} />}
      {value !== null && value.length > 0 && <Cases trajectories={value} />}
    </>
  );
}

function closest(entry: TrajectoryItem) {
  return [...entry.closestApproaches].sort((a, b) => a.radiusKm - b.radiusKm)[0];
}

function Encounter({ entry }: { entry: TrajectoryItem }) {
  const [look, setLook] = useState<EncounterLook>('side');
  const { value, error } = useLoaded(
    () => call<EncounterView>('GET', `/api/trajectories/${entry.id}/encounter`),
    entry.id,
  );
  return (
    <section aria-label={`Encounter of ${entry.name}`}>
      <ProblemBox error={error} />
      <label>
        Seen{' '}
        <select value={look} onChange={(event) => setLook(event.currentTarget.value as EncounterLook)}>
          {ENCOUNTER_LOOKS.map(([id, label]) => (
            <option key={id} value={id}>
              {label}
            </option>
          ))}
        </select>
      </label>
      {value !== null && (
        <Figure
          scene={encounterScene(value, look)}
          caption="The path about closest approach; axes and field lines as the rotation model has them then, which may be off by the phase error."
        />
      )}
    </section>
  );
}

function Reading({ entry, onDeleted }: { entry: TrajectoryItem; onDeleted: () => void }) {
  const [error, setError] = useState<unknown>(null);
  const remove = async () => {
    try {
      await call('DELETE', `/api/trajectories/${entry.id}`);
      go('/trajectories');
      onDeleted();
    } catch (failure) {
      setError(failure);
    }
  };
  return (
    <section class="card" aria-label={`What was read of ${entry.name}`}>
      <h2>{entry.name}: what was read</h2>
      <ul>
        {entry.reading.map((sentence) => (
          <li key={sentence}>{sentence}</li>
        ))}
      </ul>
      {entry.notices.map((notice) => (
        <p key={notice.text} class={`notice ${notice.severity}`}>
          {notice.text}
        </p>
      ))}
      <p class="small">SHA-256 {entry.sha256}</p>
      <ProblemBox error={error} />
      <p>
        <a href={`/api/trajectories/${entry.id}/source`}>Original file</a> ·{' '}
        <Link to={`/environment/${entry.id}`}>See it in the belts</Link> ·{' '}
        <button type="button" onClick={remove}>
          Delete
        </button>
      </p>
    </section>
  );
}

function Upload({ onKept }: { onKept: () => void }) {
  const [waiting, setWaiting] = useState<readonly Waiting[]>([]);
  const [planet, setPlanet] = useState('');
  const [over, setOver] = useState(false);
  const form = (file: File) => {
    const data = new FormData();
    data.append('studyId', studyId.value!);
    if (planet !== '') data.append('planet', planet);
    data.append('file', file);
    return data;
  };
  const read = async (files: Iterable<File>) => {
    const fresh = await Promise.all(
      [...files].map(async (file): Promise<Waiting> => {
        try {
          return { file, reading: await call('POST', '/api/trajectories?dryRun=true', form(file)), error: null };
        } catch (error) {
          return { file, reading: null, error };
        }
      }),
    );
    setWaiting((old) => [...old, ...fresh]);
  };
  const drop = (file: File) => setWaiting((old) => old.filter((entry) => entry.file !== file));
  const keep = async ({ file }: Waiting) => {
    try {
      const kept = await call<TrajectoryItem>('POST', '/api/trajectories', form(file));
      drop(file);
      onKept();
      go(`/trajectories/${kept.id}`);
    } catch (error) {
      setWaiting((old) => old.map((entry) => (entry.file === file ? { ...entry, error } : entry)));
    }
  };
  return (
    <section
      class={over ? 'drop over' : 'drop'}
      aria-label="Upload ephemerides"
      onDragOver={(event) => {
        event.preventDefault();
        setOver(true);
      }}
      onDragLeave={() => setOver(false)}
      onDrop={(event) => {
        event.preventDefault();
        setOver(false);
        if (event.dataTransfer !== null) read(event.dataTransfer.files);
      }}
    >
      <p>
        Drop ephemerides here (OEM as text or XML, SPK, CSV), or{' '}
        <label class="file">
          choose files
          <input
            type="file"
            multiple
            onChange={(event) => {
              read(event.currentTarget.files ?? []);
              event.currentTarget.value = '';
            }}
          />
        </label>
        . Nothing is kept until you have seen what was read.{' '}
        <label>
          Planet{' '}
          <select value={planet} onChange={(event) => setPlanet(event.currentTarget.value)}>
            <option value="">as the file says</option>
            <option value="uranus">Uranus</option>
            <option value="neptune">Neptune</option>
          </select>
        </label>
      </p>
      {waiting.map((entry) => (
        <div key={entry.file.name} class="card">
          <h2>{entry.file.name}</h2>
          <ProblemBox error={entry.error} />
          {entry.reading !== null && (
            <>
              <ul>
                {entry.reading.reading.map((sentence) => (
                  <li key={sentence}>{sentence}</li>
                ))}
              </ul>
              <button type="button" class="primary" onClick={() => keep(entry)}>
                Keep this trajectory
              </button>
            </>
          )}{' '}
          <button type="button" onClick={() => drop(entry.file)}>
            Put aside
          </button>
        </div>
      ))}
    </section>
  );
}

const SKETCH_FIELDS = [
  ['periapsisPlanetRadii', 'Periapsis, planet radii', '1.5'],
  ['vInfKmS', 'v∞, km/s', '8'],
  ['inclinationDeg', 'Inclination, degrees', '60'],
  ['nodeDeg', 'Node, degrees', '0'],
  ['argumentDeg', 'Argument of periapsis, degrees', '0'],
] as const;

function Sketch({ onKept }: { onKept: () => void }) {
  const [error, setError] = useState<unknown>(null);
  const make = async (event: SubmitEvent & { currentTarget: HTMLFormElement }) => {
    event.preventDefault();
    const data = new FormData(event.currentTarget);
    try {
      const made = await call<TrajectoryItem>('POST', '/api/trajectories/flyby', {
        studyId: studyId.value,
        planet: data.get('planet'),
        name: data.get('name'),
        periapsisUtc: data.get('periapsisUtc'),
        ...Object.fromEntries(SKETCH_FIELDS.map(([field]) => [field, Number(data.get(field))])),
      });
      setError(null);
      onKept();
      go(`/trajectories/${made.id}`);
    } catch (failure) {
      setError(failure);
    }
  };
  return (
    <details>
      <summary>Sketch a flyby, when no ephemeris exists yet</summary>
      <form class="grid" onSubmit={make}>
        <label>
          Name <input name="name" required defaultValue="Sketched flyby" />
        </label>
        <label>
          Planet{' '}
          <select name="planet">
            <option value="uranus">Uranus</option>
            <option value="neptune">Neptune</option>
          </select>
        </label>
        <label>
          Periapsis, UTC <input name="periapsisUtc" required defaultValue="2045-06-14T09:30:00" />
        </label>
        {SKETCH_FIELDS.map(([field, label, value]) => (
          <label key={field}>
            {label} <input name={field} required inputMode="decimal" defaultValue={value} />
          </label>
        ))}
        <button type="submit" class="primary">
          Sketch
        </button>
      </form>
      <ProblemBox error={error} />
    </details>
  );
}

function Cases({ trajectories }: { trajectories: readonly TrajectoryItem[] }) {
  const study = studyId.value!;
  const { value, error, again } = useLoaded(() => all<CaseItem>(`/api/cases?studyId=${study}`), study);
  const [failure, setFailure] = useState<unknown>(null);
  const name = (id: string) => trajectories.find((entry) => entry.id === id)?.name ?? 'deleted trajectory';
  const make = async (event: SubmitEvent & { currentTarget: HTMLFormElement }) => {
    event.preventDefault();
    const data = new FormData(event.currentTarget);
    const legs = trajectories
      .map((entry) => ({ trajectoryId: entry.id, repetitions: Number(data.get(entry.id)) }))
      .filter((leg) => leg.repetitions > 0);
    try {
      await call('POST', '/api/cases', { studyId: study, name: data.get('name'), legs });
      setFailure(null);
      again();
    } catch (problem) {
      setFailure(problem);
    }
  };
  return (
    <section>
      <h2>Mission cases</h2>
      <ProblemBox error={error} />
      {(value ?? []).length === 0 ? (
        <Empty>No case yet. A case adds the doses of its legs, such as an approach and forty orbits.</Empty>
      ) : (
        <ul>
          {value?.map((entry) => (
            <li key={entry.id}>
              <b>{entry.name}</b>:{' '}
              {entry.legs.map((leg) => `${name(leg.trajectoryId)} × ${leg.repetitions}`).join(' + ')}
            </li>
          ))}
        </ul>
      )}
      <details>
        <summary>Put a case together</summary>
        <form class="grid" onSubmit={make}>
          <label>
            Name <input name="name" required />
          </label>
          {trajectories.map((entry) => (
            <label key={entry.id}>
              {entry.name}, times flown <input name={entry.id} inputMode="numeric" defaultValue="0" />
            </label>
          ))}
          <button type="submit" class="primary">
            Make case
          </button>
        </form>
        <ProblemBox error={failure} />
      </details>
    </section>
  );
}
