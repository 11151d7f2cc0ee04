import { useState } from 'preact/hooks';
import { three } from '../../server/figures/index.ts';
import { all, call, type MaterialItem, type OptionItem, type StackItem } from '../api.ts';
import { Empty, ProblemBox, useLoaded } from '../parts.tsx';
import { studyId } from '../state.ts';
import { Solver } from './solver.tsx';

type Unit = 'thicknessMm' | 'thicknessMil' | 'arealDensityGPerCm2';
const UNITS: readonly (readonly [Unit, string])[] = [
  ['thicknessMm', 'mm'],
  ['thicknessMil', 'mil'],
  ['arealDensityGPerCm2', 'g/cm²'],
];

interface Draft {
  readonly key: number;
  readonly materialId: string;
  readonly value: string;
  readonly unit: Unit;
}

export function ShieldingPage() {
  const study = studyId.value!;
  const stacks = useLoaded(() => all<StackItem>(`/api/stacks?studyId=${study}`), study);
  const options = useLoaded(() => all<OptionItem>(`/api/options?studyId=${study}`), study);
  const materials = useLoaded(() => all<MaterialItem>('/api/materials'), 'materials');
  return (
    <>
      <h1>Shielding</h1>
      <ProblemBox error={stacks.error ?? options.error ?? materials.error} />
      <h2>Options</h2>
      {options.value?.length === 0 && (
        <Empty>No option yet. An option names the places of a spacecraft and their shields.</Empty>
      )}
      <div class="columns">
        {options.value?.map((option) => (
          <section key={option.id} class="card">
            <h3>{option.name}</h3>
            <p>{option.massKg === null ? 'Mass not known: an area is missing.' : `${three(option.massKg)} kg`}</p>
            <ul>
              {option.places.map((place) => (
                <li key={place.placeId}>
                  <b>{place.name}</b>: {place.shieldText}
                  {place.massKg !== null && ` · ${three(place.massKg)} kg`}
                </li>
              ))}
            </ul>
          </section>
        ))}
      </div>
      {stacks.value !== null && stacks.value.length > 0 && <OptionForm stacks={stacks.value} onMade={options.again} />}
      <h2>Stacks</h2>
      <div class="columns">
        {stacks.value?.map((stack) => (
          <section key={stack.id} class="card">
            <h3>{stack.name}</h3>
            <LayerDrawing stack={stack} />
            <table>
              <thead>
                <tr>
                  <th>Layer, outside first</th>
                  <th class="num">mm</th>
                  <th class="num">mil</th>
                  <th class="num">g/cm²</th>
                </tr>
              </thead>
              <tbody>
                {stack.layersShown.map((layer, index) => (
                  <tr key={index}>
                    <td>{layer.materialName}</td>
                    <td class="num">{three(layer.thicknessMm)}</td>
                    <td class="num">{three(layer.thicknessMil)}</td>
                    <td class="num">{three(layer.arealDensityGPerCm2)}</td>
                  </tr>
                ))}
              </tbody>
            </table>
          </section>
        ))}
      </div>
      {materials.value !== null && <StackForm materials={materials.value} onMade={stacks.again} />}
      {stacks.value !== null && stacks.value.length > 0 && <Solver stacks={stacks.value} onMade={stacks.again} />}
    </>
  );
}

/** The layers to scale in areal density, outside on the left. */
function LayerDrawing({ stack }: { stack: StackItem }) {
  let x = 0;
  return (
    <svg viewBox="0 0 300 44" role="img" aria-label={stack.text}>
      <title>{stack.text}</title>
      {stack.layersShown.map((layer, index) => {
        const width = (layer.arealDensityGPerCm2 / stack.arealDensityGPerCm2) * 300;
        const from = x;
        x += width;
        return (
          <g key={index}>
            <rect x={from} y="0" width={width} height="30" class={`fill-series${index % 8} stroke-paper`} />
            <text x={from + width / 2} y="42" text-anchor="middle" font-size="11" class="fill-ink">
              {layer.materialId}
            </text>
          </g>
        );
      })}
    </svg>
  );
}

function StackForm({ materials, onMade }: { materials: readonly MaterialItem[]; onMade: () => void }) {
  const [name, setName] = useState('');
  const [layers, setLayers] = useState<readonly Draft[]>([
    { key: 1, materialId: 'Al', value: '2', unit: 'thicknessMm' },
  ]);
  const [error, setError] = useState<unknown>(null);
  const change = (key: number, part: Partial<Draft>) =>
    setLayers((old) => old.map((layer) => (layer.key === key ? { ...layer, ...part } : layer)));
  const make = async (event: SubmitEvent) => {
    event.preventDefault();
    try {
      await call('POST', '/api/stacks', {
        studyId: studyId.value,
        name,
        geometry: 'slab',
        layers: layers.map((layer) => ({ materialId: layer.materialId, [layer.unit]: Number(layer.value) })),
      });
      setError(null);
      setName('');
      onMade();
    } catch (failure) {
      setError(failure);
    }
  };
  return (
    <details>
      <summary>Build a stack</summary>
      <form onSubmit={make}>
        <label>
          Name <input required value={name} onInput={(event) => setName(event.currentTarget.value)} />
        </label>
        <ol>
          {layers.map((layer) => (
            <li key={layer.key}>
              <select
                aria-label="Material"
                value={layer.materialId}
                onChange={(event) => change(layer.key, { materialId: event.currentTarget.value })}
              >
                {materials.map((entry) => (
                  <option key={entry.id} value={entry.id}>
                    {entry.name} ({three(entry.densityGPerCm3)} g/cm³)
                  </option>
                ))}
              </select>{' '}
              <input
                aria-label="Thickness"
                inputMode="decimal"
                size={8}
                value={layer.value}
                onInput={(event) => change(layer.key, { value: event.currentTarget.value })}
              />{' '}
              <select
                aria-label="Unit"
                value={layer.unit}
                onChange={(event) => change(layer.key, { unit: event.currentTarget.value as Unit })}
              >
                {UNITS.map(([unit, label]) => (
                  <option key={unit} value={unit}>
                    {label}
                  </option>
                ))}
              </select>{' '}
              {layers.length > 1 && (
                <button
                  type="button"
                  onClick={() => setLayers((old) => old.filter((entry) => entry.key !== layer.key))}
                >
                  Remove
                </button>
              )}
            </li>
          ))}
        </ol>
        <button
          type="button"
          onClick={() =>
            setLayers((old) => [
              ...old,
              { key: Math.max(...old.map((l) => l.key)) + 1, materialId: 'Al', value: '1', unit: 'thicknessMm' },
            ])
          }
        >
          Add a layer inside
        </button>{' '}
        <button type="submit" class="primary">
          Make stack
        </button>
        <ProblemBox error={error} />
      </form>
    </details>
  );
}

function OptionForm({ stacks, onMade }: { stacks: readonly StackItem[]; onMade: () => void }) {
  const [error, setError] = useState<unknown>(null);
  const [rows, setRows] = useState(1);
  const make = async (event: SubmitEvent & { currentTarget: HTMLFormElement }) => {
    event.preventDefault();
    const data = new FormData(event.currentTarget);
    const places = Array.from({ length: rows }, (_, k) => {
      const area = Number(data.get(`area${k}`));
      return {
        placeId: data.get(`placeId${k}`),
        name: data.get(`placeId${k}`),
        stackId: data.get(`stackId${k}`),
        ...(area > 0 ? { areaM2: area } : {}),
      };
    });
    try {
      await call('POST', '/api/options', { studyId: studyId.value, name: data.get('name'), places });
      setError(null);
      onMade();
    } catch (failure) {
      setError(failure);
    }
  };
  return (
    <details>
      <summary>Put an option together</summary>
      <form onSubmit={make}>
        <label>
          Name <input name="name" required />
        </label>
        {Array.from({ length: rows }, (_, k) => (
          <fieldset key={k} class="grid">
            <legend>Place {k + 1}</legend>
            <label>
              Place, as the parts name it{' '}
              <input name={`placeId${k}`} required defaultValue={k === 0 ? 'deck' : 'core'} />
            </label>
            <label>
              Stack{' '}
              <select name={`stackId${k}`}>
                {stacks.map((stack) => (
                  <option key={stack.id} value={stack.id}>
                    {stack.name}
                  </option>
                ))}
              </select>
            </label>
            <label>
              Area, m² <input name={`area${k}`} inputMode="decimal" defaultValue="1" />
            </label>
          </fieldset>
        ))}
        <button type="button" onClick={() => setRows(rows + 1)}>
          Add a place
        </button>{' '}
        <button type="submit" class="primary">
          Make option
        </button>
        <ProblemBox error={error} />
      </form>
    </details>
  );
}
