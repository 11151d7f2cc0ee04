import { useState } from 'preact/hooks';
import { three } from '../../server/figures/index.ts';
import { all, call, type MaterialItem, type OptionItem, type StackItem } from '../api.ts';
import { Empty, ProblemBox, useLoaded } from '../parts.tsx';
import { studyId } from '../state.ts';
import { OptionForm } from './optionForm.tsx';
import { Solver } from './solver.tsx';
import { Exchange } from './stackExchange.tsx';
import { StackForm } from './stackForm.tsx';

export function ShieldingPage() {
  const study = studyId.value!;
  const stacks = useLoaded(() => all<StackItem>(`/api/stacks?studyId=${study}`), study);
  const options = useLoaded(() => all<OptionItem>(`/api/options?studyId=${study}`), study);
  const materials = useLoaded(() => all<MaterialItem>('/api/materials'), 'materials');
  const [edited, setEdited] = useState<string | null>(null);
  const [refused, setRefused] = useState<unknown>(null);
  const act = (work: Promise<unknown>, again: () => void) =>
    work.then(
      () => {
        setRefused(null);
        again();
      },
      (failure) => setRefused(failure),
    );
  const copyStack = ({ id: _id, version: _version, text: _text, layersShown: _shown, ...stack }: StackItem) =>
    act(call('POST', '/api/stacks', { ...stack, name: `${stack.name}, copy` }), stacks.again);
  const copyOption = (option: OptionItem) =>
    act(
      call('POST', '/api/options', {
        studyId: study,
        name: `${option.name}, copy`,
        places: option.places.map(({ shieldText: _text, massKg: _mass, ...place }) => place),
      }),
      options.again,
    );
  const tools = (kind: string, item: { id: string; name: string }, copy: () => void, again: () => void) => (
    <p class="small">
      <button
        type="button"
        aria-label={`Edit ${item.name}`}
        onClick={() => setEdited(edited === item.id ? null : item.id)}
      >
        {edited === item.id ? 'Close' : 'Edit'}
      </button>{' '}
      <button type="button" aria-label={`Copy ${item.name}`} onClick={copy}>
        Copy
      </button>{' '}
      <button
        type="button"
        aria-label={`Delete ${item.name}`}
        onClick={() => act(call('DELETE', `/api/${kind}/${item.id}`), again)}
      >
        Delete
      </button>
    </p>
  );
  const done = (again: () => void) => () => {
    setEdited(null);
    again();
  };
  return (
    <>
      <h1>Shielding</h1>
      <ProblemBox error={refused ?? stacks.error ?? options.error ?? materials.error} />
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
            {tools('options', option, () => copyOption(option), options.again)}
            {edited === option.id && stacks.value !== null && stacks.value.length > 0 && (
              <OptionForm stacks={stacks.value} option={option} onDone={done(options.again)} />
            )}
          </section>
        ))}
      </div>
      {stacks.value !== null && stacks.value.length > 0 && (
        <details>
          <summary>Put an option together</summary>
          <OptionForm stacks={stacks.value} option={null} onDone={options.again} />
        </details>
      )}
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
            {tools('stacks', stack, () => copyStack(stack), stacks.again)}
            {edited === stack.id && materials.value !== null && (
              <StackForm materials={materials.value} stack={stack} onDone={done(stacks.again)} />
            )}
          </section>
        ))}
      </div>
      {materials.value !== null && (
        <details>
          <summary>Build a stack</summary>
          <StackForm materials={materials.value} stack={null} onDone={stacks.again} />
        </details>
      )}
      {stacks.value !== null && options.value !== null && (
        <Exchange
          stacks={stacks.value}
          options={options.value}
          onDone={() => {
            stacks.again();
            options.again();
          }}
        />
      )}
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
