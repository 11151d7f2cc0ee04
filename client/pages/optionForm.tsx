import { useState } from 'preact/hooks';
import { call, type OptionItem, type StackItem } from '../api.ts';
import { ProblemBox } from '../parts.tsx';
import { studyId } from '../state.ts';

const KINDS = [
  ['stack', 'One stack'],
  ['spot', 'One stack with a spot shield over the part'],
  ['sectors', 'Sectors, each behind its stack'],
  ['box', 'Box of six walls'],
] as const;
type Kind = (typeof KINDS)[number][0];
const WALLS = ['+x', '−x', '+y', '−y', '+z', '−z'];
const SIZES = [
  ['areaM2', 'over an area, m²'],
  ['innerBoxMm', 'round a box, inner size x, y, z in mm'],
  ['innerSphereRadiusMm', 'round a sphere, inner radius in mm'],
  ['none', 'not known'],
] as const;

/** A place as it is typed: numbers are words until they are sent. */
interface PlaceDraft {
  readonly key: number;
  readonly placeId: string;
  readonly kind: Kind;
  readonly stackId: string;
  readonly spotId: string;
  readonly spotShare: string;
  readonly spotAreaM2: string;
  readonly sectors: readonly { readonly fraction: string; readonly stackId: string }[];
  readonly boxMm: string;
  readonly partMm: string;
  readonly wallIds: readonly string[];
  readonly pathRule: string;
  readonly sizeKind: string;
  readonly size: string;
}

function newPlace(key: number, stackId: string): PlaceDraft {
  return {
    key,
    placeId: key === 1 ? 'deck' : key === 2 ? 'core' : '',
    kind: 'stack',
    stackId,
    spotId: stackId,
    spotShare: '100',
    spotAreaM2: '',
    sectors: [
      { fraction: '90', stackId },
      { fraction: '10', stackId },
    ],
    boxMm: '300, 250, 200',
    partMm: '0, 0, 0',
    wallIds: WALLS.map(() => stackId),
    pathRule: 'slant',
    sizeKind: 'areaM2',
    size: '1',
  };
}

/** A stored place as a draft. Layers that no stack has any more are left to be chosen anew: an empty choice. */
function draftOf(place: OptionItem['places'][number], key: number, stacks: readonly StackItem[]): PlaceDraft {
  const idOf = (layers: unknown) =>
    stacks.find((stack) => JSON.stringify(stack.layers) === JSON.stringify(layers))?.id ?? '';
  const { shield } = place;
  const sizeKind = (['areaM2', 'innerBoxMm', 'innerSphereRadiusMm'] as const).find((kind) => place[kind] !== undefined);
  const draft = {
    ...newPlace(key, stacks[0].id),
    placeId: place.placeId,
    sizeKind: sizeKind ?? 'none',
    size: sizeKind === undefined ? '' : String(place[sizeKind]),
  };
  switch (shield.kind) {
    case 'stack':
      return {
        ...draft,
        stackId: idOf(shield.stack.layers),
        ...(shield.spot === undefined
          ? {}
          : {
              kind: 'spot',
              spotId: idOf(shield.spot.layers),
              spotShare: String(100 * (shield.spot.coveredFraction ?? 1)),
              spotAreaM2: shield.spot.areaM2 === undefined ? '' : String(shield.spot.areaM2),
            }),
      };
    case 'sectors':
      return {
        ...draft,
        kind: 'sectors',
        sectors: shield.sectors.map(({ fraction, stack }) => ({
          fraction: String(Number((100 * fraction).toPrecision(10))),
          stackId: idOf(stack.layers),
        })),
      };
    case 'box':
      return {
        ...draft,
        kind: 'box',
        boxMm: shield.box.innerSizeMm.join(', '),
        partMm: shield.box.positionMm.join(', '),
        wallIds: shield.box.walls.map((layers) => (layers.length === 0 ? 'open' : idOf(layers))),
        pathRule: shield.pathRule ?? 'slant',
      };
  }
}

const numbers = (words: string) =>
  words
    .split(/[\s,;×]+/)
    .filter(Boolean)
    .map(Number);

/** A stack without its name and id: what shields are made of. */
function plain({ geometry, innerRadiusMm, backing, layers }: StackItem) {
  return {
    geometry,
    ...(innerRadiusMm === undefined ? {} : { innerRadiusMm }),
    ...(backing === undefined ? {} : { backing }),
    layers,
  };
}

function placeBody(place: PlaceDraft, stacks: readonly StackItem[]): Record<string, unknown> {
  const stackOf = (id: string): StackItem => {
    const stack = stacks.find((one) => one.id === id);
    if (stack === undefined) throw new Error(`Choose a stack in place "${place.placeId}".`);
    return stack;
  };
  const size =
    place.kind === 'box' || place.kind === 'sectors' || place.sizeKind === 'none' || place.size.trim() === ''
      ? {}
      : { [place.sizeKind]: place.sizeKind === 'innerBoxMm' ? numbers(place.size) : Number(place.size) };
  const base = { placeId: place.placeId, name: place.placeId, ...size };
  switch (place.kind) {
    case 'stack':
      return { ...base, stackId: place.stackId };
    case 'spot':
      return {
        ...base,
        shield: {
          kind: 'stack',
          stack: plain(stackOf(place.stackId)),
          spot: {
            layers: stackOf(place.spotId).layers,
            coveredFraction: Number(place.spotShare) / 100,
            ...(place.spotAreaM2.trim() === '' ? {} : { areaM2: Number(place.spotAreaM2) }),
          },
        },
      };
    case 'sectors':
      return {
        ...base,
        shield: {
          kind: 'sectors',
          sectors: place.sectors.map(({ fraction, stackId }) => ({
            name: stackOf(stackId).name,
            fraction: Number(fraction) / 100,
            stack: plain(stackOf(stackId)),
          })),
        },
      };
    case 'box':
      return {
        ...base,
        shield: {
          kind: 'box',
          pathRule: place.pathRule,
          box: {
            innerSizeMm: numbers(place.boxMm),
            positionMm: numbers(place.partMm),
            walls: place.wallIds.map((id) => (id === 'open' ? [] : stackOf(id).layers)),
          },
        },
      };
  }
}

/** Puts an option together, or gives an option new places; past assessments keep what they had. */
export function OptionForm({
  stacks,
  option,
  onDone,
}: {
  stacks: readonly StackItem[];
  option: OptionItem | null;
  onDone: () => void;
}) {
  const [error, setError] = useState<unknown>(null);
  const [name, setName] = useState(option?.name ?? '');
  const [places, setPlaces] = useState<readonly PlaceDraft[]>(() =>
    option === null
      ? [newPlace(1, stacks[0].id)]
      : option.places.map((place, index) => draftOf(place, index + 1, stacks)),
  );
  const change = (key: number, part: Partial<PlaceDraft>) =>
    setPlaces((old) => old.map((place) => (place.key === key ? { ...place, ...part } : place)));
  const save = async (event: SubmitEvent) => {
    event.preventDefault();
    const body = { studyId: studyId.value, name, places: places.map((place) => placeBody(place, stacks)) };
    try {
      if (option === null) await call('POST', '/api/options', body);
      else await call('PUT', `/api/options/${option.id}`, body, undefined, option.version);
      setError(null);
      onDone();
    } catch (failure) {
      setError(failure);
    }
  };
  const pick = (label: string, value: string, onPick: (id: string) => void, open = false) => (
    <label>
      {label}{' '}
      <select required value={value} onChange={(event) => onPick(event.currentTarget.value)}>
        {value === '' && <option value="">choose: not among the stacks</option>}
        {open && <option value="open">open</option>}
        {stacks.map((stack) => (
          <option key={stack.id} value={stack.id}>
            {stack.name}
          </option>
        ))}
      </select>
    </label>
  );
  const words = (label: string, value: string, onWords: (text: string) => void) => (
    <label>
      {label} <input required value={value} onInput={(event) => onWords(event.currentTarget.value)} />
    </label>
  );
  return (
    <form onSubmit={save} aria-label={option === null ? 'New option' : `Edit ${option.name}`}>
      {words('Name', name, setName)}
      {places.map((place, index) => {
        const sum = place.sectors.reduce((total, sector) => total + Number(sector.fraction), 0);
        return (
          <fieldset key={place.key} class="grid">
            <legend>Place {index + 1}</legend>
            {words('Place, as the parts name it', place.placeId, (placeId) => change(place.key, { placeId }))}
            <label>
              Shield{' '}
              <select
                value={place.kind}
                onChange={(event) => change(place.key, { kind: event.currentTarget.value as Kind })}
              >
                {KINDS.map(([id, label]) => (
                  <option key={id} value={id}>
                    {label}
                  </option>
                ))}
              </select>
            </label>
            {(place.kind === 'stack' || place.kind === 'spot') &&
              pick('Stack', place.stackId, (stackId) => change(place.key, { stackId }))}
            {place.kind === 'spot' && (
              <>
                {pick('Spot shield, the layers of', place.spotId, (spotId) => change(place.key, { spotId }))}
                {words('It covers, % of all directions', place.spotShare, (spotShare) =>
                  change(place.key, { spotShare }),
                )}
                <label>
                  Its area, m², for the mass{' '}
                  <input
                    inputMode="decimal"
                    value={place.spotAreaM2}
                    onInput={(event) => change(place.key, { spotAreaM2: event.currentTarget.value })}
                  />
                </label>
              </>
            )}
            {place.kind === 'sectors' && (
              <div>
                {place.sectors.map((sector, k) => {
                  const set = (part: Partial<typeof sector>) =>
                    change(place.key, {
                      sectors: place.sectors.map((one, j) => (j === k ? { ...one, ...part } : one)),
                    });
                  return (
                    <p key={k}>
                      {words(`Sector ${k + 1}, % of 4π`, sector.fraction, (fraction) => set({ fraction }))}{' '}
                      {pick('behind', sector.stackId, (stackId) => set({ stackId }))}
                    </p>
                  );
                })}
                <p aria-live="polite" class="small">
                  Sum {Number(sum.toPrecision(8))} %{Math.abs(sum - 100) > 1e-4 && ': must be 100 %'}{' '}
                  <button
                    type="button"
                    onClick={() =>
                      change(place.key, { sectors: [...place.sectors, { fraction: '0', stackId: stacks[0].id }] })
                    }
                  >
                    Add a sector
                  </button>
                </p>
              </div>
            )}
            {place.kind === 'box' && (
              <>
                {words('Inner size x, y, z, mm', place.boxMm, (boxMm) => change(place.key, { boxMm }))}
                {words('Part from the centre x, y, z, mm', place.partMm, (partMm) => change(place.key, { partMm }))}
                {WALLS.map((wall, k) => (
                  <span key={wall}>
                    {pick(
                      `Wall ${wall}, the layers of`,
                      place.wallIds[k],
                      (id) => change(place.key, { wallIds: place.wallIds.map((old, j) => (j === k ? id : old)) }),
                      true,
                    )}
                  </span>
                ))}
                <label>
                  Paths{' '}
                  <select
                    value={place.pathRule}
                    onChange={(event) => change(place.key, { pathRule: event.currentTarget.value })}
                  >
                    <option value="slant">slant paths, solid spheres</option>
                    <option value="minimum">minimum paths, hollow shells</option>
                  </select>
                </label>
              </>
            )}
            {(place.kind === 'stack' || place.kind === 'spot') && (
              <>
                <label>
                  Size, for the mass{' '}
                  <select
                    value={place.sizeKind}
                    onChange={(event) => change(place.key, { sizeKind: event.currentTarget.value })}
                  >
                    {SIZES.map(([id, label]) => (
                      <option key={id} value={id}>
                        {label}
                      </option>
                    ))}
                  </select>
                </label>
                {place.sizeKind !== 'none' && words('Size', place.size, (size) => change(place.key, { size }))}
              </>
            )}
            {places.length > 1 && (
              <button type="button" onClick={() => setPlaces((old) => old.filter((entry) => entry.key !== place.key))}>
                Remove place {index + 1}
              </button>
            )}
          </fieldset>
        );
      })}
      <button
        type="button"
        onClick={() =>
          setPlaces((old) => [...old, newPlace(Math.max(...old.map((place) => place.key)) + 1, stacks[0].id)])
        }
      >
        Add a place
      </button>{' '}
      <button type="submit" class="primary">
        {option === null ? 'Make option' : 'Save option'}
      </button>
      <ProblemBox error={error} />
    </form>
  );
}
