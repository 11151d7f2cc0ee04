import { useState } from 'preact/hooks';
import { three } from '../../server/figures/index.ts';
import { call, type MaterialItem, type StackItem } from '../api.ts';
import { ProblemBox } from '../parts.tsx';
import { studyId } from '../state.ts';

type Unit = 'thicknessMm' | 'thicknessMil' | 'arealDensityGPerCm2';
const UNITS: readonly (readonly [Unit, string])[] = [
  ['thicknessMm', 'mm'],
  ['thicknessMil', 'mil'],
  ['arealDensityGPerCm2', 'g/cm²'],
];
const SHAPES = [
  ['open', 'Slab, open behind'],
  ['backed', 'Slab, backed by its last material'],
  ['sphere', 'Solid sphere'],
  ['shell', 'Hollow shell'],
] as const;
type Shape = (typeof SHAPES)[number][0];

interface Draft {
  readonly key: number;
  readonly materialId: string;
  readonly value: string;
  readonly unit: Unit;
}

function draftsOf(stack: StackItem | null): readonly Draft[] {
  if (stack === null) return [{ key: 1, materialId: 'Al', value: '2', unit: 'thicknessMm' }];
  return stack.layers.map((layer, index) => {
    const unit = UNITS.map(([name]) => name).find((name) => layer[name] !== undefined) ?? 'thicknessMm';
    return { key: index + 1, materialId: String(layer.materialId), value: String(layer[unit]), unit };
  });
}

function shapeOf(stack: StackItem | null): Shape {
  if (stack === null || stack.geometry === 'slab') return stack?.backing === 'same' ? 'backed' : 'open';
  return stack.geometry === 'shell' ? 'shell' : 'sphere';
}

/** Makes a stack, or changes `stack`; what past assessments used is not touched by a change. */
export function StackForm({
  materials,
  stack,
  onDone,
}: {
  materials: readonly MaterialItem[];
  stack: StackItem | null;
  onDone: () => void;
}) {
  const [name, setName] = useState(stack?.name ?? '');
  const [shape, setShape] = useState<Shape>(shapeOf(stack));
  const [radius, setRadius] = useState(String(stack?.innerRadiusMm ?? 100));
  const [layers, setLayers] = useState(draftsOf(stack));
  const [error, setError] = useState<unknown>(null);
  const change = (key: number, part: Partial<Draft>) =>
    setLayers((old) => old.map((layer) => (layer.key === key ? { ...layer, ...part } : layer)));
  const move = (index: number, by: number) =>
    setLayers((old) => {
      const next = [...old];
      const [layer] = next.splice(index, 1);
      next.splice(index + by, 0, layer);
      return next;
    });
  const save = async (event: SubmitEvent) => {
    event.preventDefault();
    const body = {
      studyId: studyId.value,
      name,
      geometry: shape === 'open' || shape === 'backed' ? 'slab' : shape,
      ...(shape === 'backed' ? { backing: 'same' } : {}),
      ...(shape === 'shell' ? { innerRadiusMm: Number(radius) } : {}),
      layers: layers.map((layer) => ({ materialId: layer.materialId, [layer.unit]: Number(layer.value) })),
    };
    try {
      if (stack === null) await call('POST', '/api/stacks', body);
      else await call('PUT', `/api/stacks/${stack.id}`, body, undefined, stack.version);
      setError(null);
      if (stack === null) setName('');
      onDone();
    } catch (failure) {
      setError(failure);
    }
  };
  return (
    <form onSubmit={save} aria-label={stack === null ? 'New stack' : `Edit ${stack.name}`}>
      <label>
        Name <input required value={name} onInput={(event) => setName(event.currentTarget.value)} />
      </label>{' '}
      <label>
        Shape{' '}
        <select value={shape} onChange={(event) => setShape(event.currentTarget.value as Shape)}>
          {SHAPES.map(([id, label]) => (
            <option key={id} value={id}>
              {label}
            </option>
          ))}
        </select>
      </label>{' '}
      {shape === 'shell' && (
        <label>
          Inner radius, mm{' '}
          <input
            inputMode="decimal"
            size={8}
            value={radius}
            onInput={(event) => setRadius(event.currentTarget.value)}
          />
        </label>
      )}
      <ol>
        {layers.map((layer, index) => (
          <li key={layer.key}>
            <select
              aria-label={`Material of layer ${index + 1}`}
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
              aria-label={`Thickness of layer ${index + 1}`}
              inputMode="decimal"
              size={8}
              value={layer.value}
              onInput={(event) => change(layer.key, { value: event.currentTarget.value })}
            />{' '}
            <select
              aria-label={`Unit of layer ${index + 1}`}
              value={layer.unit}
              onChange={(event) => change(layer.key, { unit: event.currentTarget.value as Unit })}
            >
              {UNITS.map(([unit, label]) => (
                <option key={unit} value={unit}>
                  {label}
                </option>
              ))}
            </select>{' '}
            {index > 0 && (
              <button type="button" aria-label={`Move layer ${index + 1} outward`} onClick={() => move(index, -1)}>
                ↑
              </button>
            )}{' '}
            {index < layers.length - 1 && (
              <button type="button" aria-label={`Move layer ${index + 1} inward`} onClick={() => move(index, 1)}>
                ↓
              </button>
            )}{' '}
            {layers.length > 1 && (
              <button
                type="button"
                aria-label={`Remove layer ${index + 1}`}
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
        {stack === null ? 'Make stack' : 'Save stack'}
      </button>
      <ProblemBox error={error} />
    </form>
  );
}
