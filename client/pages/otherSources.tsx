import { useState } from 'preact/hooks';
import { three } from '../../server/figures/index.ts';
import { call, type OtherSourceItem } from '../api.ts';
import { ProblemBox } from '../parts.tsx';

type Kind = 'dose' | 'doseDepth' | 'differential' | 'integral';

interface Draft {
  readonly name: string;
  readonly source: string;
  readonly phase: string;
  readonly kind: Kind;
  readonly species: 'electron' | 'proton';
  /** One number, or two columns. */
  readonly text: string;
  readonly example: boolean;
}

const EMPTY: Draft = {
  name: '',
  source: '',
  phase: 'cruise',
  kind: 'dose',
  species: 'proton',
  text: '',
  example: false,
};

const KINDS: readonly (readonly [Kind, string, string])[] = [
  ['dose', 'a dose behind every shield', 'Dose, krad(Si)'],
  ['doseDepth', 'dose against depth in aluminium', 'Two columns: depth mm, dose krad(Si)'],
  ['differential', 'a fluence, differential', 'Two columns: energy MeV, fluence cm⁻² MeV⁻¹, over 4π'],
  ['integral', 'a fluence, integral', 'Two columns: energy MeV, fluence above it cm⁻², over 4π'],
];

/** Sources besides the belts: listed, added, edited. They go into the next assessment. */
export function OtherSources({
  value,
  onChange,
}: {
  value: readonly OtherSourceItem[];
  onChange: (sources: readonly OtherSourceItem[]) => void;
}) {
  const [draft, setDraft] = useState<Draft>(EMPTY);
  const [edited, setEdited] = useState<number | null>(null);
  const [error, setError] = useState<unknown>(null);
  const set = (part: Partial<Draft>) => setDraft((old) => ({ ...old, ...part }));
  const keep = (event: SubmitEvent) => {
    event.preventDefault();
    try {
      const source = readDraft(draft);
      onChange(edited === null ? [...value, source] : value.map((old, index) => (index === edited ? source : old)));
      setDraft(EMPTY);
      setEdited(null);
      setError(null);
    } catch (failure) {
      setError(failure);
    }
  };
  const addExample = async () => {
    try {
      onChange([...value, await call<OtherSourceItem>('GET', '/api/other-sources/king-1974?phase=cruise')]);
      setError(null);
    } catch (failure) {
      setError(failure);
    }
  };
  const [, , hint] = KINDS.find(([kind]) => kind === draft.kind)!;
  return (
    <fieldset>
      <legend>Other sources than the belts</legend>
      {value.length === 0 ? (
        <p class="small">None: cruise, other planets, radioisotope sources and cosmic rays are not in the doses.</p>
      ) : (
        <table>
          <thead>
            <tr>
              <th>Name</th>
              <th>Phase</th>
              <th>Given as</th>
              <th>Citation or origin</th>
              <th>
                <span class="hidden">Change</span>
              </th>
            </tr>
          </thead>
          <tbody>
            {value.map((source, index) => (
              <tr key={index}>
                <td>{source.name}</td>
                <td>{source.phase}</td>
                <td>{given(source)}</td>
                <td class="small">{source.source}</td>
                <td>
                  <button
                    type="button"
                    aria-label={`Edit ${source.name}`}
                    onClick={() => {
                      setDraft(draftOf(source));
                      setEdited(index);
                    }}
                  >
                    Edit
                  </button>{' '}
                  <button
                    type="button"
                    aria-label={`Remove ${source.name}`}
                    onClick={() => {
                      onChange(value.filter((_, other) => other !== index));
                      setEdited(null);
                    }}
                  >
                    Remove
                  </button>
                </td>
              </tr>
            ))}
          </tbody>
        </table>
      )}
      <form class="grid" onSubmit={keep}>
        <label>
          Source name{' '}
          <input required value={draft.name} onInput={(event) => set({ name: event.currentTarget.value })} />
        </label>
        <label>
          Citation or origin{' '}
          <input required value={draft.source} onInput={(event) => set({ source: event.currentTarget.value })} />
        </label>
        <label>
          Mission phase{' '}
          <input required value={draft.phase} onInput={(event) => set({ phase: event.currentTarget.value })} />
        </label>
        <label>
          Given as{' '}
          <select value={draft.kind} onChange={(event) => set({ kind: event.currentTarget.value as Kind })}>
            {KINDS.map(([kind, words]) => (
              <option key={kind} value={kind}>
                {words}
              </option>
            ))}
          </select>
        </label>
        {(draft.kind === 'differential' || draft.kind === 'integral') && (
          <label>
            Particles{' '}
            <select
              value={draft.species}
              onChange={(event) => set({ species: event.currentTarget.value as Draft['species'] })}
            >
              <option value="proton">protons</option>
              <option value="electron">electrons</option>
            </select>
          </label>
        )}
        {draft.kind === 'dose' ? (
          <label>
            {hint}{' '}
            <input
              required
              inputMode="decimal"
              value={draft.text}
              onInput={(event) => set({ text: event.currentTarget.value })}
            />
          </label>
        ) : (
          <label>
            {hint}{' '}
            <textarea
              required
              rows={6}
              value={draft.text}
              onInput={(event) => set({ text: event.currentTarget.value })}
            />
          </label>
        )}
        <p>
          <button type="submit">{edited === null ? 'Add this source' : 'Keep the change'}</button>{' '}
          <button type="button" onClick={addExample}>
            Add the example of King (1974)
          </button>
        </p>
      </form>
      <ProblemBox error={error} />
    </fieldset>
  );
}

function readDraft({ name, source, phase, kind, species, text, example }: Draft): OtherSourceItem {
  const common = { name, source, phase };
  if (kind === 'dose') return { ...common, doseKradSi: readNumber(text, 1) };
  const [x, y] = readColumns(text);
  if (kind === 'doseDepth') return { ...common, doseDepth: { depthsMm: x, doseKradSi: y } };
  return {
    ...common,
    fluence: {
      species,
      energiesMeV: x,
      ...(kind === 'differential' ? { differentialPerCm2MeV: y } : { integralPerCm2: y }),
      ...(example ? { example } : {}),
    },
  };
}

/** Two columns parted by comma, semicolon, tab or spaces; a first line of words is a heading. */
function readColumns(text: string): [number[], number[]] {
  const x: number[] = [];
  const y: number[] = [];
  text.split(/\r?\n/).forEach((line, index) => {
    const cells = line.trim().split(/\s*[,;\t]\s*|\s+/);
    if (line.trim() === '' || (x.length === 0 && index === 0 && cells.every((cell) => Number.isNaN(Number(cell))))) {
      return;
    }
    if (cells.length !== 2) throw new Error(`Line ${index + 1} has ${cells.length} columns instead of 2.`);
    x.push(readNumber(cells[0], index + 1));
    y.push(readNumber(cells[1], index + 1));
  });
  if (x.length < 2) throw new Error('At least two lines of numbers are needed.');
  return [x, y];
}

function readNumber(text: string, line: number): number {
  const value = Number(text);
  if (text.trim() === '' || !Number.isFinite(value)) throw new Error(`Line ${line}: "${text}" is no number.`);
  return value;
}

function draftOf({ name, source, phase, doseKradSi, doseDepth, fluence }: OtherSourceItem): Draft {
  const columns = (x: readonly number[], y: readonly number[]) => x.map((value, i) => `${value}, ${y[i]}`).join('\n');
  const common = { ...EMPTY, name, source, phase };
  if (doseKradSi !== undefined) return { ...common, kind: 'dose', text: String(doseKradSi) };
  if (doseDepth !== undefined) {
    return { ...common, kind: 'doseDepth', text: columns(doseDepth.depthsMm, doseDepth.doseKradSi) };
  }
  const values = fluence!.differentialPerCm2MeV ?? fluence!.integralPerCm2!;
  return {
    ...common,
    kind: fluence!.differentialPerCm2MeV === undefined ? 'integral' : 'differential',
    species: fluence!.species,
    text: columns(fluence!.energiesMeV, values),
    example: fluence!.example === true,
  };
}

function given({ doseKradSi, doseDepth, fluence }: OtherSourceItem): string {
  if (doseKradSi !== undefined) return `${three(doseKradSi)} krad(Si)`;
  if (doseDepth !== undefined) return `dose at ${doseDepth.depthsMm.length} depths`;
  const { species, energiesMeV, example } = fluence!;
  const span = `${species}s, ${three(energiesMeV[0])} to ${three(energiesMeV[energiesMeV.length - 1])} MeV`;
  return example === true ? `${span}; example only` : span;
}
