import { useState } from 'preact/hooks';
import { call, type OptionItem, type StackItem } from '../api.ts';
import { ProblemBox } from '../parts.tsx';
import { studyId } from '../state.ts';
import { DataTable } from '../table.tsx';

interface Entry {
  readonly name: string;
  readonly body: Record<string, unknown>;
  readonly path: '/api/stacks' | '/api/options';
}

const COLUMNS = ['stack', 'geometry', 'backing', 'innerRadiusMm', 'materialId', 'thicknessMm'] as const;

/**
 * Stacks and options in and out: JSON holds both whole; CSV holds stacks, a line a layer, outside first, columns
 * stack, geometry, backing, innerRadiusMm, materialId, thicknessMm. What is taken in is added; what is refused is named.
 */
export function Exchange({
  stacks,
  options,
  onDone,
}: {
  stacks: readonly StackItem[];
  options: readonly OptionItem[];
  onDone: () => void;
}) {
  const [error, setError] = useState<unknown>(null);
  const [said, setSaid] = useState('');
  const layers = stacks.flatMap((stack) =>
    stack.layersShown.map((layer, index) => ({ stack, layer, key: `${stack.id}${index}` })),
  );
  const saveJson = () => {
    const plain = {
      stacks: stacks.map(({ name, geometry, innerRadiusMm, backing, layers: own }) => ({
        name,
        geometry,
        innerRadiusMm,
        backing,
        layers: own,
      })),
      options: options.map(({ name, places }) => ({
        name,
        places: places.map(({ shieldText: _text, massKg: _mass, ...place }) => place),
      })),
    };
    const link = document.createElement('a');
    link.href = URL.createObjectURL(new Blob([`${JSON.stringify(plain, null, 2)}\n`], { type: 'application/json' }));
    link.download = 'stacks-and-options.json';
    link.click();
    URL.revokeObjectURL(link.href);
  };
  const take = async (file: File) => {
    const refused: string[] = [];
    let kept = 0;
    try {
      const text = await file.text();
      const entries = file.name.toLowerCase().endsWith('.csv') ? fromCsv(text) : fromJson(text);
      for (const { name, body, path } of entries) {
        try {
          await call('POST', path, { ...body, name, studyId: studyId.value });
          kept += 1;
        } catch (failure) {
          refused.push(`${name}: ${failure instanceof Error ? failure.message : String(failure)}`);
        }
      }
      setError(refused.length === 0 ? null : new Error(refused.join(' ')));
    } catch (failure) {
      setError(failure);
    }
    setSaid(`${kept} taken in${refused.length === 0 ? '' : `, ${refused.length} refused`}.`);
    onDone();
  };
  return (
    <details>
      <summary>Stacks and options as files</summary>
      <DataTable
        name="Layers of all stacks"
        rows={layers}
        keyOf={(row) => row.key}
        columns={[
          { header: 'stack', value: (row) => row.stack.name },
          { header: 'geometry', value: (row) => row.stack.geometry },
          { header: 'backing', value: (row) => row.stack.backing },
          { header: 'innerRadiusMm', numeric: true, value: (row) => row.stack.innerRadiusMm },
          { header: 'materialId', value: (row) => row.layer.materialId },
          { header: 'thicknessMm', numeric: true, value: (row) => row.layer.thicknessMm },
          { header: 'thicknessMil', numeric: true, value: (row) => row.layer.thicknessMil },
          { header: 'arealDensityGPerCm2', numeric: true, value: (row) => row.layer.arealDensityGPerCm2 },
        ]}
      />
      <p>
        <button type="button" onClick={saveJson}>
          Stacks and options as JSON
        </button>{' '}
        <label>
          Take in a JSON or CSV file{' '}
          <input
            type="file"
            accept=".json,.csv"
            onChange={(event) => {
              const input = event.currentTarget;
              const file = input.files?.[0];
              if (file !== undefined) void take(file).finally(() => (input.value = ''));
            }}
          />
        </label>{' '}
        <span aria-live="polite">{said}</span>
      </p>
      <p class="small">
        CSV: a line a layer, outside first; columns {COLUMNS.join(', ')}; no quotes. Both are added to what is here.
      </p>
      <ProblemBox error={error} />
    </details>
  );
}

function fromJson(text: string): Entry[] {
  const parsed = JSON.parse(text) as { stacks?: unknown; options?: unknown };
  const listOf = (value: unknown, path: Entry['path']): Entry[] => {
    if (value === undefined) return [];
    if (!Array.isArray(value)) throw new Error('The file needs lists "stacks" and "options".');
    return value.map((body: Record<string, unknown>, index) => ({
      name: String(body.name ?? `no. ${index + 1}`),
      body,
      path,
    }));
  };
  const entries = [...listOf(parsed.stacks, '/api/stacks'), ...listOf(parsed.options, '/api/options')];
  if (entries.length === 0) throw new Error('The file holds neither stacks nor options.');
  return entries;
}

function fromCsv(text: string): Entry[] {
  const [head, ...lines] = text.split(/\r?\n/).filter((line) => line.trim() !== '');
  const header = (head ?? '').split(',').map((field) => field.trim());
  const at = (name: (typeof COLUMNS)[number]) => header.indexOf(name);
  for (const needed of ['stack', 'geometry', 'materialId', 'thicknessMm'] as const) {
    if (at(needed) < 0) throw new Error(`Line 1 has no column ${needed}.`);
  }
  const byName = new Map<string, { body: Record<string, unknown>; layers: Record<string, unknown>[] }>();
  lines.forEach((line, index) => {
    if (line.includes('"')) throw new Error(`Line ${index + 2} has a quote; fields are taken without quotes.`);
    const fields = line.split(',').map((field) => field.trim());
    const field = (name: (typeof COLUMNS)[number]) => (at(name) < 0 ? '' : (fields[at(name)] ?? ''));
    const thicknessMm = Number(field('thicknessMm'));
    if (field('thicknessMm') === '' || !Number.isFinite(thicknessMm)) {
      throw new Error(`Line ${index + 2}: thicknessMm "${field('thicknessMm')}" is no number.`);
    }
    const known = byName.get(field('stack')) ?? {
      body: {
        geometry: field('geometry'),
        ...(field('backing') === '' ? {} : { backing: field('backing') }),
        ...(field('innerRadiusMm') === '' ? {} : { innerRadiusMm: Number(field('innerRadiusMm')) }),
      },
      layers: [],
    };
    known.layers.push({ materialId: field('materialId'), thicknessMm });
    byName.set(field('stack'), known);
  });
  return [...byName].map(([name, { body, layers }]) => ({ name, body: { ...body, layers }, path: '/api/stacks' }));
}
